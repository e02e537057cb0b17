"""Formulas as MathML, written when the pages are built: no script runs in the reader's browser, nothing is fetched."""

from typing import Any, Final

from docutils import nodes
from latex2mathml.converter import convert
from sphinx.application import Sphinx
from sphinx.util import logging
from sphinx.writers.html5 import HTML5Translator

_LOGGER: Final = logging.getLogger(__name__)


def setup(app: Sphinx) -> dict[str, Any]:
    """Register the renderer under the name 'mathml'."""
    app.add_html_math_renderer("mathml", (_visit_inline, None), (_visit_block, None))
    return {"parallel_read_safe": True, "parallel_write_safe": True}


def _visit_inline(writer: HTML5Translator, node: nodes.Element) -> None:
    writer.body.append(writer.starttag(node, "span", "", CLASS="math"))
    writer.body.append(f"{_markup(node, display='inline')}</span>")
    raise nodes.SkipNode


def _visit_block(writer: HTML5Translator, node: nodes.Element) -> None:
    writer.body.append(writer.starttag(node, "div", CLASS="math"))
    if number := node.get("number"):
        writer.body.append(f'<span class="eqno">({number})')
        writer.add_permalink_ref(node, "Link to this equation")
        writer.body.append("</span>")
    writer.body.append(f"{_markup(node, display='block')}</div>\n")
    raise nodes.SkipNode


def _markup(node: nodes.Element, display: str) -> str:
    text = node.astext()
    # A double backslash outside an environment starts a new line of an aligned block, as in every LaTeX document.
    if display == "block" and "\\\\" in text and "\\begin" not in text:
        text = f"\\begin{{aligned}}{text}\\end{{aligned}}"
    try:
        return convert(text, display=display)
    except Exception as error:  # noqa: BLE001  # whatever the converter raises is a fault of the formula
        _LOGGER.warning("formula %r cannot be rendered: %r", text, error, location=node)
        return text
