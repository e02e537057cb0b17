"""Labelled tables of numbers: text for terminals, HTML for notebooks."""

import html
from collections.abc import Sequence
from typing import final

from ._frozen import Frozen


@final
class Table(Frozen):
    """A labelled table, printed as aligned text and shown as HTML in notebooks.

    Parameters
    ----------
    head : sequence of str
        The lines above the table: what it is, in which notation and unit.
    columns : sequence of str
        The labels of the columns; empty for none.
    rows : sequence of (str, sequence of str)
        The label and the cells of each row.
    """

    __slots__ = ("columns", "head", "rows")

    head: tuple[str, ...]
    columns: tuple[str, ...]
    rows: tuple[tuple[str, tuple[str, ...]], ...]

    def __init__(self, head: Sequence[str], columns: Sequence[str], rows: Sequence[tuple[str, Sequence[str]]]) -> None:
        object.__setattr__(self, "head", tuple(head))
        object.__setattr__(self, "columns", tuple(columns))
        object.__setattr__(self, "rows", tuple((label, tuple(cells)) for label, cells in rows))

    def __str__(self) -> str:
        lines = [("", self.columns)] if self.columns else []
        lines += self.rows
        label_width = max((len(label) for label, _ in lines), default=0)
        count = max((len(cells) for _, cells in lines), default=0)
        widths = [max((len(cells[k]) for _, cells in lines if k < len(cells)), default=0) for k in range(count)]
        body = [
            "  ".join(
                [label.ljust(label_width), *(cell.rjust(width) for cell, width in zip(cells, widths, strict=False))]
            )
            for label, cells in lines
        ]
        return "\n".join([*self.head, *(line.rstrip() for line in body)])

    def __repr__(self) -> str:
        return str(self)

    def __reduce__(self) -> tuple[object, ...]:
        return Table, (self.head, self.columns, self.rows)

    def _repr_html_(self) -> str:
        """Return the table as HTML, every text escaped."""
        cell = html.escape
        caption = "<br>".join(cell(line) for line in self.head)
        top = "".join(f'<th scope="col">{cell(label)}</th>' for label in self.columns)
        head = f"<thead><tr><th></th>{top}</tr></thead>" if self.columns else ""
        body = "".join(
            f'<tr><th scope="row">{cell(label)}</th>' + "".join(f"<td>{cell(text)}</td>" for text in cells) + "</tr>"
            for label, cells in self.rows
        )
        return f"<table><caption>{caption}</caption>{head}<tbody>{body}</tbody></table>"
