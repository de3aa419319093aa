"""Figure of breakover: the peak as a string starts to move up, against how long it had stood."""

from __future__ import annotations

import numpy as np
from matplotlib.figure import Figure

from forensics.report.figures import style
from forensics.report.scene import Scene


@style.styled
def breakover_chart(scene: Scene) -> Figure:
    """Draw peak less following pick-up weight against standing time, and against bit depth."""
    show, found = scene.show, scene.findings.calibration.breakover
    figure = style.sheet(9.0, 3.4)
    width, height = figure.get_size_inches()
    left, right = (
        figure.add_axes((x / width, 0.62 / height, 3.4 / width, 2.45 / height)) for x in (0.95, 5.3)
    )
    for ax in (left, right):
        ax.axhline(0.0, color=style.MUTED, linewidth=0.8)
        ax.grid(visible=True)
        ax.set_ylabel(f"peak less pick-up weight [{show.unit('force')}]")
    left.set_xlabel("stood still before [min]")
    right.set_xlabel(f"bit depth [{show.unit('length')}]")
    if found is None or not len(found):
        style.empty_note(left, "none seen")
        return figure
    excess = show.scaled(found.peak - found.steady, "force")
    marks = {"linestyle": "none", "marker": "^", "markersize": 5, "mfc": "white", "mec": style.PICK_UP}
    left.plot(found.still / 60.0, excess, **marks)
    right.plot(show.scaled(found.bit, "length"), excess, **marks)
    if float(np.ptp(np.log10(np.maximum(found.still, 1.0)))) > 1.0:
        left.set_xscale("log")
    return figure
