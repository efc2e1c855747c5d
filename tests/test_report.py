"""Reports: one self-contained page, the same as Markdown, the same bytes each time; what must stand in them."""
from __future__ import annotations

import re
import shutil
from html import unescape
from html.parser import HTMLParser
from pathlib import Path

import pytest

from ratebased.case import read_column_case, read_flux_case, read_rate_case
from ratebased.command import BAD_INPUT, DONE, main
from ratebased.errors import InputError
from ratebased.report import Report, column_report, interface_report, rating_report, to_html, to_markdown, write_report
from ratebased.report.blocks import Cell, Mark, Picture, Section, Table
from ratebased.report.terminal import table_text

TEMPLATES = Path(__file__).parents[1] / "ratebased" / "case" / "template"
EXAMPLES = Path(__file__).parents[1] / "examples"
VOID = {"meta", "link", "br", "wbr", "img", "hr", "input"}


class Page(HTMLParser):
    """Checks that tags are closed in order, and collects the links of a page."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.open: list[str] = []
        self.anchors: set[str] = set()
        self.targets: set[str] = set()
        self.tags: list[str] = []
        self.feed(text)
        self.close()
        assert self.open == []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        if tag not in VOID:
            self.open.append(tag)
        for name, value in attrs:
            if name == "id":
                assert value not in self.anchors, f"id {value} twice"
                self.anchors.add(str(value))
            if name in ("href", "src", "xlink:href"):
                assert str(value).startswith("#"), f"{tag} leads outside: {value}"
                self.targets.add(str(value)[1:])

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.handle_starttag(tag, attrs)
        if tag not in VOID:
            self.open.pop()

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag


def checked(html: str) -> Page:
    """The page, with what every one of them must have."""
    page = Page(html)
    assert page.targets <= page.anchors
    assert "script" not in page.tags and "@import" not in html
    assert not re.search(r"url\((?!#)", html), "a style that loads something"
    assert html.count("licensed practice") == 2
    assert "SHA-256" in html and "@media print" in html and "max-width: 40rem" in html
    return page


@pytest.fixture(scope="module")
def rating() -> Report:
    """The solvent-recovery table with intervals from few samples, on the fast path."""
    import dataclasses

    from ratebased.efficiency import RatingOptions, Uncertainty
    case = read_rate_case(EXAMPLES / "solvent_recovery" / "case.toml")
    case = dataclasses.replace(case, options=RatingOptions(), uncertainty=Uncertainty(samples=16))
    return rating_report(case.rate(), title=case.title, hardware=case.hardware, files=case.files)


def test_rating_report(rating: Report) -> None:
    html, markdown = to_html(rating), to_markdown(rating)
    page = checked(html)
    assert page.tags.count("svg") == 3
    shown = unescape(re.sub("<[^>]*>", "", html))
    for text in ("ethanol: negative", "\u25bc -0", "osmotic diffusion", "probability of E < 0", "case.toml",
                 "profile.csv", "Bubble-Tray Design Manual", "method AIChE", "weeping"):
        assert text in shown
    for text in ("ethanol: negative", "osmotic diffusion", "probability of E < 0", "Bubble-Tray Design Manual",
                 "licensed practice", "Figure in the HTML report"):
        assert text in markdown
    titles = [section.title for section in rating.sections]
    assert re.findall("<h2>(.*)</h2>", html) == titles
    assert re.findall("^## (.*)$", markdown, re.MULTILINE) == titles


def test_same_bytes(rating: Report, tmp_path: Path) -> None:
    """Figures included: a report has no dates and no random names."""
    case = read_flux_case(TEMPLATES / "flux.toml")
    for folder in ("one", "two"):
        answer = case.solve()
        write_report(interface_report(answer, title=case.title, files=case.files,  # type: ignore[arg-type]
                                      method=case.method, hardware=()), tmp_path / folder)
    for name in ("report.html", "report.md"):
        assert (tmp_path / "one" / name).read_bytes() == (tmp_path / "two" / name).read_bytes()
    assert not list(tmp_path.rglob("*.part"))
    checked((tmp_path / "one" / "report.html").read_text())


def test_column_report() -> None:
    case = read_column_case(TEMPLATES / "column.toml")
    comparison = case.compare(count_stages=False)
    report = column_report(comparison, title=case.title, hardware=case.hardware, files=case.files)
    html = to_html(report)
    assert checked(html).tags.count("svg") == 3
    rate = comparison.profiles["rate-based"]
    assert f"{rate.purity('methanol'):.4f}" in html
    for word in ("one E", "fed back", "rate-based", "Connell (1946)", "smallest eigenvalue", "pressure drop"):
        assert word in html
    assert to_markdown(report).count("\n| ") > 60


def test_packed_report() -> None:
    """Heights instead of limits of trays; a component that stays in the vapour has no column."""
    case = read_rate_case(EXAMPLES / "packed_absorber" / "case.toml")
    report = rating_report(case.rate(), title=case.title, hardware=case.hardware, files=case.files)
    heights = next(section for section in report.sections if section.key == "heights")
    table = next(block for block in heights.blocks if isinstance(block, Table))
    assert "HETP acetone / m" in table.head and not any("air" in title for title in table.head)
    checked(to_html(report))


def test_without_matplotlib(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    """No figures, and everything else."""
    monkeypatch.setattr("ratebased.report.common.find_spec", lambda name: None)
    assert main(["flux", str(TEMPLATES / "flux.toml"), "--out", str(tmp_path), "--report"]) == DONE
    page = checked((tmp_path / "report.html").read_text())
    assert "svg" not in page.tags and "table" in page.tags


def test_without_jinja(monkeypatch: pytest.MonkeyPatch, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The extra that is missing is named, with the way to get it, before anything is computed."""
    monkeypatch.setattr("ratebased.report.render.find_spec", lambda name: None)
    assert main(["flux", str(TEMPLATES / "flux.toml"), "--out", str(tmp_path), "--report"]) == BAD_INPUT
    assert "pip install 'ratebased[report]'" in capsys.readouterr().err
    assert not list(tmp_path.iterdir())


def test_text_of_the_user_is_no_markup(tmp_path: Path) -> None:
    """A title with tags in it is shown, not obeyed; a pipe does not break a Markdown table."""
    case = tmp_path / "case.toml"
    shutil.copy(TEMPLATES / "flux.toml", case)
    case.write_text(case.read_text().replace('"My interface"', '"<script>alert(1)</script> & | more"'))
    assert main(["flux", str(case), "--out", str(tmp_path), "--report"]) == DONE
    html = (tmp_path / "report.html").read_text()
    assert "script" not in checked(html).tags
    assert "&lt;script&gt;alert(1)&lt;/script&gt; &amp; | more" in html
    report = Report("a", "b", (Section("c", "d", (Table(("e|f",), ((Cell("g|h", figure=False),),)),)),), "i")
    assert "| e\\|f |" in to_markdown(report) and "| g\\|h |" in to_markdown(report)


def test_marks_do_not_need_colour() -> None:
    table = Table(("E",), ((Cell("-0.5", Mark.NEGATIVE),), (Cell("1.5", Mark.ABOVE),), (Cell("1.2", Mark.LIMIT),)))
    html = to_html(Report("t", "l", (Section("s", "S", (table, Picture("<svg></svg>", "what"))),), "licensed practice"))
    for text in ("\u25bc -0.5", "\u25b2 1.5", "! 1.2"):
        assert text in html and text in table_text(table)


def test_rows_fit_their_head() -> None:
    with pytest.raises(ValueError, match="a row of 1 cells under a head of 2"):
        Table(("a", "b"), ((Cell("1"),),))


def test_unwritable_folder(tmp_path: Path, rating: Report) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match="cannot be written"):
        write_report(rating, tmp_path / "file" / "folder")
