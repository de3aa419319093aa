"""Figure of the bit's own witness: bit load by hookload against bit load by witness, slide by slide."""

from __future__ import annotations

import numpy as np
from matplotlib.figure import Figure

from forensics.report.figures import style
from forensics.report.scene import Scene

SIGMAS = 2.0
MOST_ROWS = 3000


@style.styled
def cross_plot(scene: Scene) -> Figure:
    """Draw every slide as a point with its error bars over the cloud of its rows."""
    found, show = scene.findings, scene.show
    witness = found.loads.witness
    figure = style.sheet(6.6, 5.4)
    (ax,) = style.stack(figure, [4.45], (0.95, 0.35, 0.35, 0.6))
    ax.grid(visible=True)
    unit = show.unit("force")
    ax.set_xlabel(f"bit load by the bit's own witness [{unit}]")
    ax.set_ylabel(f"bit load by hookload alone [{unit}]")
    if witness is None or not witness.slides:
        style.empty_note(ax, "no slide in which both speak")
        return figure
    both = np.flatnonzero(np.isfinite(witness.load) & np.isfinite(witness.by_hookload))
    both = both[:: max(1, len(both) // MOST_ROWS)]
    x, y = (show.scaled(values[both], "force") for values in (witness.load, witness.by_hookload))
    ax.plot(x, y, linestyle="none", marker=".", markersize=2, color=style.MUTED, alpha=0.35, rasterized=True)
    widest = float(np.percentile(np.maximum(x, y), 99)) if len(x) else 0.0
    x, y, error = (
        show.scaled([getattr(check, name) for check in witness.slides], "force")
        for name in ("by_witness", "by_hookload", "sigma")
    )
    far = np.abs([check.sigmas for check in witness.slides]) > SIGMAS
    for rows, colour, fill in ((~far, style.ROTATING, "white"), (far, style.PICK_UP, style.PICK_UP)):
        ax.errorbar(
            x[rows], y[rows], yerr=1.645 * error[rows], linestyle="none", marker="o", markersize=5,
            mfc=fill, color=colour, mew=1.3, elinewidth=0.9, zorder=3,
        )  # fmt: skip
    top = 1.08 * float(max(np.max(x), np.max(y + error), widest, 1.0))
    ax.plot([0.0, top], [0.0, top], color=style.MUTED, linewidth=0.9)
    ax.annotate("both agree", (0.97 * top, 0.97 * top), ha="right", va="top", fontsize=8, rotation=40)
    ax.set_xlim(0.0, top)
    ax.set_ylim(0.0, top)
    return figure
