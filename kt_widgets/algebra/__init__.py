"""Laurent polynomials, their matrices, elimination, Smith forms and ideals; one file touches python-flint."""
