"""Exact: the only room that knows FLINT. SymPy expressions in, exact polynomials out."""
