"""A self-describing JSON record of one quantity."""
