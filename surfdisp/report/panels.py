"""Small multiples: one panel per shot on one sheet, and the labels they share."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from .palette import sheet

PANELS_PER_SHEET = 9
COLUMNS = 3


def grid(count: int, *, panel_height: float, extra_height: float) -> tuple[Figure, list[Axes]]:
    """Return a sheet with `count` panels, row by row; no empty frame stands at its end."""
    columns = min(max(count, 1), COLUMNS)
    rows = -(-max(count, 1) // columns)
    figure = sheet(rows * panel_height + extra_height)
    panels = [panel for row in figure.subplots(rows, columns, squeeze=False) for panel in row]
    for axes in panels[count:]:
        axes.remove()
    return figure, panels[:count]


def label_outer(panels: Sequence[Axes], x_label: str, y_label: str) -> None:
    """Label the lowest panel of each column and the first of each row."""
    for index, axes in enumerate(panels):
        if index + COLUMNS >= len(panels):
            axes.set_xlabel(x_label)
        if index % COLUMNS == 0:
            axes.set_ylabel(y_label)


def legend_below(figure: Figure, panels: Sequence[Axes], *, columns: int) -> None:
    """Put one legend for all panels under them, each entry once."""
    entries = {}
    for axes in panels:
        handles, labels = axes.get_legend_handles_labels()
        entries.update(dict(zip(labels, handles, strict=True)))
    if entries:
        figure.legend(list(entries.values()), list(entries), loc="outside lower center", ncols=columns)
