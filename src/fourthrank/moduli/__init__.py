"""Elastic constants: the sets that people exchange, to and from stiffness and compliance."""
