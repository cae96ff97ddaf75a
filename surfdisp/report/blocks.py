"""The bricks of the report: plain data that report.typ knows how to draw."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from .words import printable, shortened

Block = dict[str, Any]

TEXT, NUMBER, WIDE = "text", "number", "wide"
"""How a column of a table is set: to the left, to the right, or taking what space is left."""

LONGEST_WORD = 36
LONGEST_ENTRY = 420
LONGEST_LINE = 300


def heading(text: str) -> Block:
    """Return a heading."""
    return {"kind": "heading", "text": text}


def paragraph(*sentences: str, leads_on: bool = False) -> Block:
    """Return a paragraph of the sentences that say something; one that leads on stays with what follows."""
    text = shown(" ".join(filter(None, sentences)), 4 * LONGEST_ENTRY)
    return {"kind": "text", "text": text, "leads_on": leads_on}


def bullets(entries: Sequence[str], most: int, elsewhere: str) -> Block:
    """Return a list of at most `most` entries; a last one tells where the others are."""
    kept = [shown(entry) for entry in entries[:most]]
    if len(entries) > most:
        kept.append(f"{len(entries) - most} more: see {elsewhere}.")
    return {"kind": "list", "entries": kept}


def table(columns: Sequence[tuple[str, str]], rows: Sequence[Sequence[str]]) -> Block:
    """Return a table; `columns` are pairs of heading and kind: TEXT, NUMBER or WIDE."""
    return {
        "kind": "table",
        "head": [name for name, _ in columns],
        "columns": [kind for _, kind in columns],
        "rows": [[shown(cell) for cell in row] for row in rows],
    }


def figures_named(name: str, files: Sequence[str], caption: str, *, width: int, most: int = 1) -> list[Block]:
    """Return the first `most` of the figure `name` and its numbered further ones among `files`.

    `width` is in percent of the text; the last caption tells how many figures are left in the output folder.
    """
    wanted = [file for file in files if file.removesuffix(".png") == name or file.startswith(f"{name}_")]
    blocks: list[Block] = [
        {"kind": "figure", "file": file, "caption": shown(caption), "width": width} for file in wanted[:most]
    ]
    left = len(wanted) - len(blocks)
    if left > 0:
        blocks[-1]["caption"] += f" {left} more of this kind in the output folder."
    return blocks


def keys(entries: Sequence[tuple[str, str, str]]) -> Block:
    """Return the figures to be seen first: label, value and note of each."""
    cells = [{"label": label, "value": shown(value), "note": shown(note)} for label, value, note in entries]
    return {"kind": "keys", "entries": cells}


def new_page() -> Block:
    """Return the end of a page."""
    return {"kind": "new page"}


def signature(*entries: str) -> Block:
    """Return lines to be filled in by hand."""
    return {"kind": "signature", "entries": list(entries)}


def beside(narrow: Block, picture: Block) -> Block:
    """Return a narrow table with a figure to its right."""
    return {"kind": "beside", "table": narrow, "figure": picture}


def settings(text: str, most: int) -> Block:
    """Return at most `most` lines of settings, in two parts that stand side by side."""
    lines = [_as_line(line) for line in text.splitlines() if line.strip()]
    kept = lines[:most] + (["# the rest: see project.h5"] if len(lines) > most else [])
    middle = (len(kept) + 1) // 2
    return {"kind": "settings", "parts": ["\n".join(kept[:middle]), "\n".join(kept[middle:])]}


def _as_line(line: str) -> str:
    return " " * (len(line) - len(line.lstrip(" "))) + shortened(printable(line), LONGEST_LINE)


def shown(text: str, longest: int = LONGEST_ENTRY) -> str:
    """Return `text` as the report prints it: on one line, not endless, long words breakable."""
    words = shortened(printable(text), longest).split(" ")
    return " ".join(_breakable(word) for word in words)


def _breakable(word: str) -> str:
    if len(word) <= LONGEST_WORD:
        return word
    parts = [word[at : at + LONGEST_WORD] for at in range(0, len(word), LONGEST_WORD)]
    return "\u200b".join(parts)  # zero-width space: may break here, shows nothing
