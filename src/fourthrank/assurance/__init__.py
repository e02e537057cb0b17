"""Assurance: whether data can be what it claims to be, and where two sets of data part."""
