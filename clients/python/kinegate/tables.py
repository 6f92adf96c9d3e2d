"""Tables for people: plain text at a prompt, HTML in a notebook."""

from __future__ import annotations

import html
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Table"]


@dataclass(frozen=True, repr=False)
class Table:
    """Rows of text below headings.

    >>> print(Table("masses", ["particle", "mass"], [["p", "938 MeV"], ["pi0", "135 MeV"]]))
    masses
    particle  mass
    p         938 MeV
    pi0       135 MeV
    """

    title: str
    """What the table shows."""
    columns: Sequence[str] = ()
    """Headings; empty for none."""
    rows: Sequence[Sequence[str]] = field(default_factory=list)
    """Cells, row by row."""
    note: str = ""
    """A line below the table."""

    def __str__(self) -> str:
        grid = [*([list(self.columns)] if self.columns else []), *map(list, self.rows)]
        widths = [max(map(len, column)) for column in zip(*grid, strict=True)]
        lines = [self.title] if self.title else []
        lines += [
            "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip()
            for row in grid
        ]
        return "\n".join([*lines, *([self.note] if self.note else [])])

    __repr__ = __str__

    def _repr_html_(self) -> str:
        head = "".join(f"<th>{html.escape(c)}</th>" for c in self.columns)
        body = "".join(
            "<tr>" + "".join(f"<td>{html.escape(c)}</td>" for c in row) + "</tr>"
            for row in self.rows
        )
        parts = [f"<caption><b>{html.escape(self.title)}</b></caption>" if self.title else ""]
        parts.append(f"<thead><tr>{head}</tr></thead>" if head else "")
        note = f"<p><small>{html.escape(self.note)}</small></p>" if self.note else ""
        return f"<table>{''.join(parts)}<tbody>{body}</tbody></table>{note}"
