"""Sphinx configuration. The build reads and the built pages load nothing from other hosts."""

import sys
from importlib.metadata import version as version_of
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent / "_extensions"))

project = "fourthrank"
author = "The fourthrank authors"
copyright = "2026, the fourthrank authors"
version = release = version_of("fourthrank")

extensions = ["sphinx.ext.autodoc", "sphinx.ext.autosummary", "sphinx.ext.doctest", "numpydoc", "mathml"]
exclude_patterns = ["_build"]
nitpicky = True

html_theme = "furo"
html_title = f"fourthrank {version}"
html_math_renderer = "mathml"
html_show_sourcelink = False

autodoc_member_order = "bysource"
autodoc_typehints = "none"  # the signature gives names and defaults, the Parameters section gives types in words
autosummary_generate = True
numpydoc_show_class_members = False
numpydoc_xref_param_type = False
