"""Programs for type checkers: what must be accepted, with the type that results, and what must be rejected."""
