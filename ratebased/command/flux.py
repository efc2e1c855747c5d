"""`ratebased flux`: one film or one interface."""
from __future__ import annotations

import json
import textwrap
from argparse import Namespace
from typing import TYPE_CHECKING, Any

from ..files import SIGNIFICANT, checksum, write_whole
from .terminal import progress, written

if TYPE_CHECKING:
    import pandas as pd

    from ..case import FilmCase, InterfaceCase
    from ..film import FilmFlux
    from ..interface import InterfaceFlux
    from ..report import Report


def run(options: Namespace) -> None:
    """Solve and explain."""
    from ..case import FilmCase, read_flux_case
    from ..efficiency.package import plain
    from ..efficiency.table import CAUTION
    from ..report import require_jinja, to_markdown, write_report
    from ..report.blocks import Bullets, Table
    from ..report.common import versions
    from ..report.terminal import WIDTH, table_text

    if options.report:
        require_jinja()
    with progress("reading case, building properties"):
        case = read_flux_case(options.case)
    report, frame = (_film(case, case.solve()) if isinstance(case, FilmCase) else _interface(case, case.solve()))
    record: dict[str, Any] = {
        "title": case.title, "caution": CAUTION, "versions": versions(), "inputs_sha256": checksum(case.files),
        "method": case.method,
        "rows": [{key: plain(value) for key, value in row.items()} for row in frame.to_dict("records")]}
    texts = {"flux.csv": frame.to_csv(index=False, float_format=f"%{SIGNIFICANT}", lineterminator="\n"),
             "flux.md": to_markdown(report),
             "flux.json": json.dumps(record, indent=1, ensure_ascii=False, allow_nan=False) + "\n"}
    folder = options.out or options.case.parent / "results"
    for name, text in texts.items():
        write_whole(folder / name, text)
    files = [folder / name for name in texts]
    if options.report:
        files += write_report(report, folder)
    shown = {"csv": "flux.csv", "markdown": "flux.md", "json": "flux.json"}
    if options.format in shown:
        print(texts[shown[options.format]], end="")
    else:
        lines = [case.title, ""]
        for block in report.sections[0].blocks:
            if isinstance(block, Table):
                lines += [table_text(block), ""]
            elif isinstance(block, Bullets):
                for item in block.items:
                    lines += textwrap.wrap(item, WIDTH, subsequent_indent="  ", break_on_hyphens=False)
                lines.append("")
        print("\n".join([*lines, *textwrap.wrap(CAUTION, WIDTH)]))
    written(files)


def _film(case: FilmCase, flux: FilmFlux) -> tuple[Report, pd.DataFrame]:
    import pandas as pd

    from ..report import film_report

    frame = pd.DataFrame({"component": case.names, "face_0": flux.x0, "face_delta": flux.xd, "N_mol_m2_s": flux.N,
                          "J_mol_m2_s": flux.J, "regime": flux.regime})
    return film_report(case.names, flux, title=case.title, files=case.files, method=case.method), frame


def _interface(case: InterfaceCase, answer: InterfaceFlux) -> tuple[Report, pd.DataFrame]:
    import pandas as pd

    from ..explanation import explain_flux
    from ..report import interface_report

    parts = explain_flux(answer).to_frame()
    state = pd.DataFrame({"component": answer.names, "y_bulk": answer.films.y, "y_interface": answer.y_I,
                          "x_interface": answer.x_I, "x_bulk": answer.films.x, "N_mol_m2_s": answer.N,
                          "T_interface_K": float(answer.T_I)})
    frame = state.merge(parts, on="component")
    return interface_report(answer, title=case.title, files=case.files, method=case.method,
                            hardware=case.hardware), frame
