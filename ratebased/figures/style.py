"""How the figures look: one style, applied in a context, so that matplotlib's own settings stay as they were.

Series are told apart by marker, line and a label at the curve; colour only helps. The colours are those of Okabe & Ito
(2008, "Color universal design", from memory), ordered so that neighbours differ in lightness.
"""
from __future__ import annotations

import functools
import textwrap
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ParamSpec

import numpy as np
from numpy.typing import NDArray

from ..errors import InputError

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

Arguments = ParamSpec("Arguments")

WIDTH = 5.6
"""Width of a figure, inch: at a printed column of 85 mm its smallest letters are still 4.5 points high."""
SMALL = 7.5
"""Size of notes, ticks and labels at curves, points."""
GREY = "#666666"
PALE = "#e4e4e4"

STYLE: dict[str, Any] = {
    "font.family": "sans-serif", "font.sans-serif": ["DejaVu Sans"], "font.size": 8.5,
    "text.hinting": "no_hinting", "mathtext.fontset": "dejavusans", "text.usetex": False, "axes.unicode_minus": True,
    "axes.titlesize": 8.5, "axes.titleweight": "bold", "axes.labelsize": 8.5, "axes.linewidth": 0.7,
    "axes.spines.top": False, "axes.spines.right": False, "axes.axisbelow": True, "axes.grid": False,
    "axes.edgecolor": "black", "axes.labelcolor": "black", "axes.facecolor": "white", "axes.titlepad": 4.0,
    "xtick.labelsize": SMALL, "ytick.labelsize": SMALL, "xtick.major.width": 0.7, "ytick.major.width": 0.7,
    "xtick.major.size": 3.0, "ytick.major.size": 3.0, "xtick.color": "black", "ytick.color": "black",
    "xtick.direction": "out", "ytick.direction": "out",
    "grid.color": "#d0d0d0", "grid.linewidth": 0.5, "grid.linestyle": "-",
    "lines.linewidth": 1.2, "lines.markersize": 4.5, "lines.markeredgewidth": 0.9, "hatch.linewidth": 0.6,
    "legend.fontsize": SMALL, "legend.frameon": False, "legend.handlelength": 2.6, "legend.borderaxespad": 0.2,
    "legend.columnspacing": 1.4, "legend.labelspacing": 0.3,
    "figure.facecolor": "white", "figure.dpi": 100.0, "figure.constrained_layout.use": False,
    "savefig.facecolor": "white", "savefig.edgecolor": "white", "savefig.transparent": False, "savefig.bbox": None,
    "savefig.dpi": 200.0, "path.simplify": True, "path.sketch": None,
    "svg.fonttype": "path", "svg.hashsalt": "ratebased", "svg.image_inline": True, "pdf.fonttype": 42,
}


@dataclass(frozen=True)
class Mark:
    """How one series is drawn."""

    color: str
    marker: str
    dash: Any


COLORS = ("#000000", "#D55E00", "#0072B2", "#009E73", "#CC79A7", "#56B4E9", "#8A6100")
MARKERS = ("o", "s", "^", "D", "v", "P", "X", "<", ">", "p")
DASHES: tuple[Any, ...] = ("-", (0, (5, 1.6)), (0, (1.2, 1.3)), (0, (6, 1.5, 1.2, 1.5)), (0, (3, 1.2)))


def mark(k: int) -> Mark:
    """Mark of series k; two series differ in at least two ways."""
    return Mark(COLORS[k % len(COLORS)], MARKERS[k % len(MARKERS)], DASHES[k % len(DASHES)])


def require_matplotlib() -> Any:
    """The module matplotlib, or an error that says how to get it."""
    try:
        import matplotlib
    except ImportError as error:
        raise InputError("figures need matplotlib, which is not installed: it comes with the optional extra `plot` "
                         "(pip install 'ratebased[plot]')") from error
    return matplotlib


def styled(make: Callable[Arguments, Figure]) -> Callable[Arguments, Figure]:
    """Make a figure in the style; the settings are put back afterwards."""
    @functools.wraps(make)
    def inside(*args: Arguments.args, **kwargs: Arguments.kwargs) -> Figure:
        with require_matplotlib().rc_context(STYLE):
            return make(*args, **kwargs)
    return inside


def new_figure(width: float = WIDTH) -> Figure:
    """An empty figure, known to no window system; `finish` gives it its height."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(width, 3.0))
    FigureCanvasAgg(figure)
    return figure


def renderer_of(figure: Any) -> Any:
    """What measures texts."""
    return figure.canvas.get_renderer()


def value_axis(ax: Axes, ticks: int) -> None:
    """At most so many round numbers on the horizontal axis, without idle zeros."""
    from matplotlib.ticker import FuncFormatter, MaxNLocator

    ax.xaxis.set_major_locator(MaxNLocator(nbins=ticks, steps=[1, 2, 5, 10]))
    ax.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{round(value, 12):g}".replace("-", "−")))


def finish(figure: Figure, body: float, *, left: float = 0.62, right: float = 0.12, top: float = 0.08,
           bottom: float = 0.44, wspace: float = 0.12, hspace: float = 0.2, handles: Sequence[Any] = (),
           notes: Sequence[str] = ()) -> tuple[float, float]:
    """Room in inches for axes (`body` high), labels around them, a block of signs above and notes below.

    Returns the place of the axes from bottom to top, inch. wspace, hspace: in mean widths and heights of the axes.
    """
    width = figure.get_figwidth()
    lines = [line for note in notes for line in textwrap.wrap(note, int((width - 0.2) * 72.0 / (0.535 * SMALL)))]
    above = top + _signs(figure, handles, width)
    below = bottom + 0.14 * len(lines) + 0.06 * bool(lines)
    height = body + above + below
    figure.set_size_inches(width, height)
    figure.subplots_adjust(left=left / width, right=1.0 - right / width, bottom=below / height,
                           top=1.0 - above / height, wspace=wspace, hspace=hspace)
    for legend in figure.legends:
        legend.set_bbox_to_anchor((0.5, 1.0 - 0.04 / height))
    if lines:
        figure.text(0.1 / width, 0.06 / height, "\n".join(lines), fontsize=SMALL, ha="left", va="bottom",
                    linespacing=1.2)
    return below, below + body


def _signs(figure: Figure, handles: Sequence[Any], width: float) -> float:
    """What the signs mean, in as few rows as the width allows; returns their height, inch."""
    if not handles:
        return 0.0
    for columns in range(len(handles), 0, -1):
        legend = figure.legend(handles=list(handles), loc="upper center", ncols=columns)
        extent = legend.get_window_extent(renderer_of(figure))
        if extent.width / figure.dpi < width - 0.3 or columns == 1:
            break
        legend.remove()
    return float(extent.height / figure.dpi) + 0.08


def stage_height(stages: int, per_stage: float = 0.17) -> float:
    """Height of axes with the stages on the vertical axis, inch."""
    return float(np.clip(per_stage * (stages + 0.4), 1.9, 6.5))


def stage_axis(ax: Axes, number: NDArray[np.int64], label: str = "Stage, number from the top") -> None:
    """Stages on the vertical axis, the top of the column at the top."""
    from matplotlib.ticker import MaxNLocator

    ax.set_ylim(float(number.max()) + 0.7, float(number.min()) - 0.7)
    ax.yaxis.set_major_locator(MaxNLocator(nbins=12, integer=True, steps=[1, 2, 5, 10], min_n_ticks=1))
    ax.grid(axis="y")
    ax.set_ylabel(label)


def folded(name: str, width: float) -> str:
    """A name broken into lines that fit `width` inch in bold."""
    return "\n".join(textwrap.wrap(name, max(4, int(width * 72.0 / (0.62 * 8.5)))))


def breaks(number: NDArray[np.int64], sound: NDArray[np.bool_]) -> list[NDArray[np.int64]]:
    """Runs of neighbouring stages with a value: a line joins no stages that have others between them."""
    index = np.flatnonzero(sound)
    if not index.size:
        return []
    return [run for run in np.split(index, np.flatnonzero((np.diff(index) > 1) | (np.diff(number[index]) > 1)) + 1)]
