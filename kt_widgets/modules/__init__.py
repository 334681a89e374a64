"""Finitely presented modules over rings of Laurent polynomials."""
