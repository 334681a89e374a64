"""Hypothesis strategies for tests of this package and of code that builds on it (needs the `test` extra)."""
