"""`ratebased rate`: profile and hardware in, efficiency table out."""
from __future__ import annotations

from argparse import Namespace

from .terminal import progress, written


def run(options: Namespace) -> None:
    """Rate a case."""
    from ..case import read_rate_case
    from ..efficiency import write_package
    from ..report import rating_report, require_jinja, write_report

    if options.report:
        require_jinja()
    with progress("reading case, building properties"):
        case = read_rate_case(options.case)
    with progress(f"rating {int(case.profile.contact.sum())} stages"):
        table = case.rate()
    folder = options.out or options.case.parent / "results"
    texts = write_package(table, folder, title=case.title, hardware=case.hardware, inputs=case.files)
    files = [folder / name for name in ("table.csv", "table.md", "table.json")]
    if options.report:
        with progress("writing the report"):
            files += write_report(rating_report(table, title=case.title, hardware=case.hardware, files=case.files),
                                  folder)
    print(texts.get(options.format, f"{case.title}\n\n{table}\n"), end="")
    written(files)
