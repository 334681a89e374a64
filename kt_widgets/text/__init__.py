"""One grammar, the printers and the portable JSON form: plain data, no objects of the rooms above."""
