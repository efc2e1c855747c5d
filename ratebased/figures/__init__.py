"""Figures of tables, columns, interfaces and films (optional extra `plot`).

Every function returns a matplotlib `Figure` of its own, known to no window system: show it in a notebook, write it with
`save_figure`, or put it in a page with `figure_svg`. Signs, lines and labels carry the meaning, colour only helps.
Stages are counted from the top of the column and drawn that way up.
"""
from .efficiencies import efficiency_figure, hetp_figure
from .entropy import entropy_figure
from .flux_split import flux_split_figure
from .operating import operating_figure
from .output import figure_svg, save_figure
from .profiles import profile_figure
from .triangle import triangle_figure

__all__ = [
    "efficiency_figure", "entropy_figure", "figure_svg", "flux_split_figure", "hetp_figure", "operating_figure",
    "profile_figure", "save_figure", "triangle_figure",
]
