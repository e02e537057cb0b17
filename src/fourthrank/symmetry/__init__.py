"""Symmetry classes: groups, projections, distances, axes and classification."""
