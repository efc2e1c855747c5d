"""Reports for people: one HTML page or Markdown from a result, with everything that a reader must know beside it."""
from .blocks import Report
from .column import column_report
from .flux import film_report, interface_report
from .rating import rating_report
from .render import require_jinja, to_html, to_markdown, write_report

__all__ = ["Report", "column_report", "film_report", "interface_report", "rating_report", "require_jinja", "to_html",
           "to_markdown", "write_report"]
