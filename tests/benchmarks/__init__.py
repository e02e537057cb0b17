"""Measurements against hand-written code; asked for by their path, no part of the default run."""
