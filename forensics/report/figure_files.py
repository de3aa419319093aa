"""Each figure of a report as files of its own, numbered as in the report."""

from __future__ import annotations

import re
from pathlib import Path

from forensics.report.drawing import png
from forensics.report.elements import Picture, Report
from forensics.report.figures.spare import hand_back
from forensics.report.figures.style import house_style

_NOT_LETTERS = re.compile(r"[^a-z0-9]+")


def write_figures(report: Report, folder: Path) -> int:
    """Write every figure as SVG and PNG, with a list of captions beside them.

    Parameters
    ----------
    report : Report
    folder : Path
        An existing folder.

    Returns
    -------
    int
        How many figures there are. The same report gives the same bytes.
    """
    captions = []
    number = 0
    with house_style():
        for section in report.sections:
            for element in (*section.elements, *(e for part in section.parts for e in part.elements)):
                if not isinstance(element, Picture):
                    continue
                number += 1
                name = f"figure_{number:02d}_{_slug(section.title)}"
                figure = element.draw()
                # No date: the same figure is the same bytes.
                figure.savefig(folder / f"{name}.svg", format="svg", metadata={"Date": None})
                (folder / f"{name}.png").write_bytes(png(figure))
                hand_back(figure)
                captions.append(f"{name}: {element.caption}")
    (folder / "captions.txt").write_text("\n".join(captions) + "\n", encoding="utf-8", newline="\n")
    return number


def _slug(title: str) -> str:
    return _NOT_LETTERS.sub("_", title.casefold()).strip("_")[:40]
