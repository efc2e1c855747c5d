"""A report as one HTML page that needs nothing else, and as Markdown."""
from __future__ import annotations

from importlib.util import find_spec
from pathlib import Path

from ..errors import InputError
from ..files import write_whole
from .blocks import Bullets, Cell, Mark, Paragraph, Picture, Report, Table

SIGNS = {Mark.PLAIN: "", Mark.NEGATIVE: "\u25bc ", Mark.ABOVE: "\u25b2 ", Mark.BLANK: "", Mark.LIMIT: "! "}
"""Written before a figure that stands out, so that no colour is needed to see it."""


LONG, LONG_WORD = 28, 48
"""Letters from which a cell of words gets a wide column, and a single word (a checksum) letters of one width."""


LONG_NAME = 18


def require_jinja() -> None:
    """Raise `InputError` where jinja2 is not installed: before anything is computed for a report."""
    if find_spec("jinja2") is None:
        raise InputError("report: HTML needs the package jinja2, pip install 'ratebased[report]'")


def to_html(report: Report) -> str:
    """One self-contained page: style and figures inside, no script, nothing from a network.

    Raises `InputError` where jinja2 is not installed.
    """
    require_jinja()
    import jinja2
    import markupsafe

    folder = Path(__file__).parent
    environment = jinja2.Environment(loader=jinja2.FileSystemLoader(folder), autoescape=True, trim_blocks=True,
                                     lstrip_blocks=True, undefined=jinja2.StrictUndefined, keep_trailing_newline=True)
    environment.filters["kind"] = lambda block: type(block).__name__.lower()
    environment.filters["look"] = _look
    environment.filters["breakable"] = lambda text: markupsafe.Markup(" ").join(
        markupsafe.Markup(_word(str(markupsafe.escape(word)))) for word in _tied(text).split(" "))
    return environment.get_template("page.html").render(
        report=report, signs={mark.value: sign for mark, sign in SIGNS.items()})


def _tied(text: str) -> str:
    """Units kept in one piece."""
    return text.replace("(m2 s)", "(m2\u00a0s)").replace(" / ", " /\u00a0")


def _word(word: str) -> str:
    """An escaped word as markup: a name with hyphens in one piece, a long one with places to break it."""
    if len(word) > LONG_NAME:
        return word.replace("_", "_<wbr>")
    return f'<span class="one">{word}</span>' if "-" in word[1:-1] else word


def _look(cell: Cell) -> str:
    """The classes of a cell."""
    one_word = not cell.figure and len(cell.text) >= LONG_WORD and " " not in cell.text
    given = {"figure": cell.figure, "code": one_word, "long": not one_word and len(cell.text) >= LONG}
    return " ".join([*(name for name, true in given.items() if true), *([cell.mark.value] if cell.mark.value else [])])


def to_markdown(report: Report) -> str:
    """The same report as Markdown; a figure leaves its words behind."""
    lines = [f"# {report.title}", "", report.lead, "", f"**{report.caution}**", ""]
    for section in report.sections:
        lines += [f"## {section.title}", ""]
        for block in section.blocks:
            if isinstance(block, Paragraph):
                lines += [f"**{block.text}**" if block.strong else block.text, ""]
            elif isinstance(block, Bullets):
                lines += [*(f"- {item}" for item in block.items), ""]
            elif isinstance(block, Table):
                lines += [*markdown_table(block), ""]
            elif isinstance(block, Picture):
                lines += [f"(Figure in the HTML report: {block.shows})", ""]
    return "\n".join(lines)


def markdown_table(table: Table) -> list[str]:
    """The lines of a table, columns padded so that it can be read as it stands."""
    texts = [[_escaped(title) for title in table.head]]
    texts += [[_escaped(SIGNS[cell.mark] + cell.text) for cell in row] for row in table.rows]
    right = [all(row[k].figure for row in table.rows) for k in range(len(table.head))]
    width = [max(3, *(len(row[k]) for row in texts)) for k in range(len(table.head))]
    lines = ["| " + " | ".join(cell.rjust(w) if r else cell.ljust(w) for cell, w, r in zip(row, width, right)) + " |"
             for row in texts]
    lines.insert(1, "|" + "|".join("-" * (w + 1) + (":" if r else "-") for w, r in zip(width, right)) + "|")
    return [*lines, "", f"*{table.caption}*"] if table.caption else lines


def _escaped(text: str) -> str:
    return text.replace("|", "\\|").replace("\n", " ")


def write_report(report: Report, folder: Path) -> tuple[Path, Path]:
    """report.html and report.md in `folder`, each written whole; returns both paths. Raises `InputError`."""
    html, markdown = folder / "report.html", folder / "report.md"
    text = to_html(report)
    write_whole(html, text)
    write_whole(markdown, to_markdown(report))
    return html, markdown
