"""Bad inputs and the error each one gets: files through the command, calls through the library.

Each row of a table of files: the file spoiled, what is replaced by what, what the one line of the error must say. Every
one ends with exit code 2 (1 where it says so), nothing on standard output and no file written.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest

import ratebased as rb
from ratebased.bootstrap import Equimolar, FluxRatio, LinearBootstrap, Stagnant
from ratebased.column import DistillateRate, Feed, LiquidFeed, Reboiler, RefluxRatio, TotalCondenser, VaporFeed
from ratebased.command import BAD_INPUT, NO_SOLUTION, main
from ratebased.efficiency import Uncertainty
from ratebased.equipment import FixedCoefficients, SieveTray
from ratebased.errors import InputError, PlausibilityWarning, PropertyRangeError, UnstableMixtureError
from ratebased.film import effective
from ratebased.properties import ThermoProperties
from ratebased.properties.activity import Nrtl

TEMPLATES = Path(__file__).parents[1] / "ratebased" / "case" / "template"
ROW_3 = "3,tray,343.5982,102725,23.2762"

RATE = [
    # the file itself
    ("case.toml", "[mixture]", "[mixture", "not a TOML file"),
    ("case.toml", "[mixture]", "[mixture]\ncomponents = []", "not a TOML file"),
    ("case.toml", 'file = "profile.csv"', 'file = "profil.csv"', "profil.csv: no such file"),
    ("case.toml", 'file = "profile.csv"', 'file = "."', "cannot be read"),
    ("case.toml", 'file = "profile.csv"', "file = 3", "expected a text in quotes"),
    ("case.toml", 'title = "My column"', "title = 1.5", "expected a text in quotes"),
    ("case.toml", 'title = "My column"', 'titel = "My column"', "unknown key 'titel'; did you mean 'title'?"),
    # unknown and missing words
    ("case.toml", "[[hardware]]", "[[hardwere]]", "no table [[hardware]]"),
    ("case.toml", "[profile]", "[profiles]", "key profile is missing (found 'profiles': is that it?)"),
    ("case.toml", "weir_height_m", "wier_height_m", "key weir_height_m is missing (found 'wier_height_m'"),
    ("case.toml", "spacing_m = 0.5", "spacing_m = 0.5\ndownkomer_fraction = 0.1",
     "unknown key 'downkomer_fraction'; did you mean 'downcomer_fraction'?"),
    ("case.toml", 'method = "AIChE"', 'method = "AICE"', "did you mean 'AIChE'?"),
    ("case.toml", 'type = "sieve tray"', 'type = "sieve"', "expected one of 'sieve tray', 'bubble-cap tray'"),
    ("case.toml", 'mixing = "pools"', 'mixing = "pool"', "did you mean 'pools'?"),
    ("case.toml", 'mixing = "pools"', 'mixing = "pools"\nat_liquid_temperatur = true',
     "did you mean 'at_liquid_temperature'?"),
    ("case.toml", 'activity = "unifac-modified"', 'activity = "unifac modified"', "did you mean 'unifac-modified'?"),
    # numbers
    ("case.toml", "diameter_m = 1.1", "diameter_m = 0.0", "diameter_m = 0.0: expected a number above 0"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = 0.5", "stage 2: active_velocity"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = 1e154", "no such size in SI units"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = nan", "diameter_m = nan: expected a finite number"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = inf", "diameter_m = inf: expected a finite number"),
    ("case.toml", "diameter_m = 1.1", f"diameter_m = 1{'0' * 400}", "expected a finite number"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = true", "diameter_m = True: expected a finite number"),
    ("case.toml", "diameter_m = 1.1", "diameter_m = [1.1]", "expected a finite number"),
    ("case.toml", "hole_area_fraction = 0.10", "hole_area_fraction = 10.0", "expected below 0.35 of the active area"),
    ("case.toml", "weir_height_m = 0.05", "weir_height_m = 50.0", "expected below the spacing"),
    ("case.toml", "stages = [2, 11]", "stages = [11, 2]", "expected [first, last], two stage numbers"),
    ("case.toml", "stages = [2, 11]", "stages = [2, 10]", "hardware, stage 11: no section of the hardware covers it"),
    ("case.toml", "balance_tolerance = 0.02", "balance_tolerance = 0.0", "expected a number above 0"),
    # mixture
    ("case.toml", '"methanol", "2-propanol", "water"]', '"methanol", "methanol", "water"]',
     "'methanol' appears more than once"),
    ("case.toml", '["methanol", "2-propanol", "water"]', "[]", "expected at least one name"),
    ("case.toml", '["methanol", "2-propanol", "water"]', '"methanol"', "expected a list of texts in quotes"),
    ("case.toml", 'activity = "unifac-modified"', 'activity = "nrtl"', "nrtl needs its binary parameters"),
    ("case.toml", 'activity = "unifac-modified"', 'noncondensing = ["air"]', "'air' is none of the components"),
    ("case.toml", 'activity = "unifac-modified"', "T_range_K = [400.0, 300.0]", "two positive numbers in rising order"),
    ("case.toml", 'activity = "unifac-modified"', "T_range_K = [345.0, 400.0]", "345"),
    # streams
    ("case.toml", "stage = 6", "stage = 66", "feed: stage 66 is not in"),
    ("case.toml", "stage = 6", "stage = 6.5", "stage = 6.5: expected a whole number"),
    ("case.toml", 'phase = "liquid"', 'phase = "fluid"', "phase = 'fluid', expected 'vapor' or 'liquid'"),
    ("case.toml", "flow_mol_s = 30.0", "flow_mol_s = 0.0", "flow_mol_s = 0.0: expected a number above 0"),
    ("case.toml", "flow_mol_s = 30.0", "flow_mol_s = 3.0", "a feed or draw missing?"),
    ("case.toml", "methanol = 0.40", "methanol = 0.30", "must sum to one (sum 0.9)"),
    ("case.toml", "methanol = 0.40", "methanol = 40.0", "expected a number of at most 1"),
    ("case.toml", "methanol = 0.40", "methanol = -0.40", "must not be negative"),
    ("case.toml", "methanol = 0.40", "methanoll = 0.40", "unknown key 'methanoll'; did you mean 'methanol'?"),
    # the profile
    ("profile.csv", "stage,kind", "stages,kind", "column stage is missing"),
    ("profile.csv", ",x_water", ",x_methanol", "column x_methanol appears more than once"),
    ("profile.csv", ",x_water", ",x_ethanol", "column x_water is missing"),
    ("profile.csv", ROW_3, "3,tray,70.4482,102725,23.2762", "column T_K: 70.4482: below 100: is it in degrees"),
    ("profile.csv", ROW_3, "3,tray,343.5982,1.02725,23.2762", "column P_Pa: 1.02725: below 200: is it in bar or kPa?"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102.725,23.2762", "is it in bar or kPa?"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,0", "a flow must be above zero"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,-23.3", "a flow must be above zero"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,", "expected a finite number"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,inf", "expected a finite number"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,many", "many: expected a finite number"),
    ("profile.csv", ROW_3, "3,tray,343.5982,102725,83.8", "round stage 4 is open by"),
    ("profile.csv", ROW_3, "4,tray,343.5982,102725,23.2762", "stages must be consecutive, expected 3"),
    ("profile.csv", ROW_3, "3,plate,343.5982,102725,23.2762", "column kind: plate: expected one of tray, segment"),
    ("profile.csv", ROW_3, "3,tray,2343.5982,102725,23.2762", "2383.6 K is not below the critical temperature"),
]

COLUMN = [
    ("stages = 12 ", "stages = 2 ", "no contact stage is left"),
    ("stages = 12 ", "stages = 1000000000 ", "expected 1 to 1000 stages"),
    ("stages = 12 ", "stages = -5 ", "expected 1 to 1000 stages"),
    ('condenser = "total"', 'condenser = "totl"', "did you mean 'total'?"),
    ("reboiler = true", "reboiler = 1", "expected true or false"),
    ("reboiler = true", "", "DistillateRate surplus"),
    ("reflux_ratio = 2.0", "", "leave 2 degrees of freedom, 1 given"),
    ("reflux_ratio = 2.0", "reflux_ratio = 2.0\nboilup_ratio = 2.0", "BoilupRatio surplus"),
    ("reflux_ratio = 2.0", "reflux_ratio = -2.0", "reflux_ratio = -2.0"),
    ("reflux_ratio = 2.0", "reflux_ration = 2.0", "unknown key 'reflux_ration'; did you mean 'reflux_ratio'?"),
    ("distillate_mol_s = 12.0", "distillate_mol_s = 31.0", "nothing of the feed (30 mol/s) is left"),
    ("distillate_mol_s = 12.0", "bottoms_mol_s = 18.0\ncondenser_duty_W = 1.0e5", "expected a negative number"),
    ("distillate_mol_s = 12.0", 'purity = {component = "ethanol", product = "top", fraction = 0.9}',
     "component = 'ethanol': expected one of 'methanol'"),
    ("distillate_mol_s = 12.0", 'purity = {component = "methanol", product = "top", fraction = 95}', "between 0 and 1"),
    ("stage = 6", "stage = 13", "feeds[0].stage = 13: the column has stages 1 to 12"),
    ("vapor_fraction = 0.0", "vapor_fraction = 1.5", "vapor_fraction = 1.5: expected a number of at most 1"),
    ("vapor_fraction = 0.0", "", "give either T_K or vapor_fraction"),
    ("water = 0.40}", "water = 0.40, air = 0.0}", "unknown key 'air'"),
    ('methanol = 0.40, "2-propanol" = 0.20, water = 0.40', "methanol = 0.6, water = 0.4",
     "component 1 is in no feed"),
    ("pressure_top_Pa = 101325.0", "pressure_top_Pa = 0.0", "expected a number above 0"),
    ("pressure_top_Pa = 101325.0", "pressure_top_Pa = 1.01325", "is it in bar or kPa?"),
    ("vapor_fraction = 0.0", "T_K = 65.0", "T_K = 65 is below 100: is it in degrees Celsius?"),
    ("[[column.feed]] ", "[column.feed] ", "expected tables [[feed]]"),
    ("count_stages = true", "count_stages = 1", "expected true or false"),
    ("count_stages = true", 'component = "watter"', "did you mean 'water'?"),
]

FLUX = [
    ("[interface]", "[film]\n[interface]", "expected one of the tables [film] and [interface]"),
    ("P_Pa = 101325.0", "P_Pa = 1.01325", "expected a number above 200"),
    ("T_K = 350.0", "T_K = 76.85", "expected a number above 100"),
    ("T_K = 350.0", "T_K = 750.0", "790 K is not below the critical temperature"),
    ("kappa_m_s = 2.0e-4", "kappa_m_s = -2.0e-4", "expected a number above 0"),
    ('"methanol / water" = 0.051', '"methanol - water" = 0.051', "key methanol / water is missing (found"),
    ('"methanol / water" = 0.051', '"methanol / water" = 0.051, "water / methanol" = 0.05', "the pair is given twice"),
    ("heat_transfer_W_m2_K = 60.0", "heat_transfer_W_m2_K = 0", "expected a number above 0"),
    ("heat_transfer_W_m2_K = 60.0", "", "key heat_transfer_W_m2_K is missing"),
    ('method = "exact"', 'method = "exakt"', "did you mean 'exact'?"),
    ("[interface.liquid]", "[interface.fluid]", "key liquid is missing (found 'fluid'"),
]

FILM = """\
[film]
components = ["a", "b", "c"]
face_0 = {a = 0.5, b = 0.5}
face_delta = {b = 0.5, c = 0.5}
diffusivity_m2_s = {"a / b" = 8e-5, "a / c" = 7e-5, "b / c" = 2e-5}
thickness_m = 1e-3
molar_density_mol_m3 = 40.0
closure = "equimolar"
"""
FILMS = [
    ('closure = "equimolar"', "", "key closure is missing"),
    ('closure = "equimolar"', 'closure = "stagnant"', "key component is missing"),
    ('closure = "equimolar"', 'closure = "latent heat"\nlatent_J_mol = {a = 1.0, b = 2.0}', "key c is missing"),
    ("thickness_m = 1e-3", "thickness_m = 0", "expected a number above 0"),
    ('"b / c" = 2e-5', '"b / c" = 0.0', "expected a number above 0"),
    ('"b / c" = 2e-5', '"b / d" = 2e-5', "key b / c is missing (found 'b / d': is that it?)"),
    ("face_0 = {a = 0.5, b = 0.5}", "face_0 = [0.5, 0.5, 0.0]", "expected mole fractions by name"),
    ("face_0 = {a = 0.5, b = 0.5}", "face_0 = {}", "must sum to one (sum 0)"),
]


def fails(arguments: list[str], message: str, capsys: pytest.CaptureFixture[str], code: int = BAD_INPUT) -> None:
    """The command ends with the code and one line that says why; nothing else comes out."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        assert main(arguments) == code
    streams = capsys.readouterr()
    assert streams.out == ""
    errors = [line for line in streams.err.splitlines() if line.startswith("ratebased: ")]
    assert len(errors) == 1 and message in errors[0], streams.err
    assert not Path(arguments[-1]).exists()


def spoiled(text: str, old: str, new: str) -> str:
    assert old in text, f"{old!r} is not in the file any more"
    return text.replace(old, new, 1)


@pytest.mark.parametrize(("file", "old", "new", "message"), RATE, ids=range(len(RATE)))
def test_rate(file: str, old: str, new: str, message: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for source, target in (("rate.toml", "case.toml"), ("profile.csv", "profile.csv")):
        text = (TEMPLATES / source).read_text()
        (tmp_path / target).write_text(spoiled(text, old, new) if target == file else text)
    fails(["rate", str(tmp_path / "case.toml"), "--out", str(tmp_path / "out")], message, capsys)


@pytest.mark.parametrize(("kind", "old", "new", "message"),
                         [("column", *row) for row in COLUMN] + [("flux", *row) for row in FLUX],
                         ids=range(len(COLUMN) + len(FLUX)))
def test_column_and_flux(kind: str, old: str, new: str, message: str, tmp_path: Path,
                         capsys: pytest.CaptureFixture[str]) -> None:
    case = tmp_path / "case.toml"
    case.write_text(spoiled((TEMPLATES / f"{kind}.toml").read_text(), old, new))
    fails([kind, str(case), "--out", str(tmp_path / "out")], message, capsys)


@pytest.mark.parametrize(("old", "new", "message"), FILMS, ids=range(len(FILMS)))
def test_film(old: str, new: str, message: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    case = tmp_path / "case.toml"
    case.write_text(spoiled(FILM, old, new))
    fails(["flux", str(case), "--out", str(tmp_path / "out")], message, capsys)


def test_other_files(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A file that is missing, a folder, no text, no words of a catalogue, a case that exists."""
    out = ["--out", str(tmp_path / "out")]
    (tmp_path / "binary").write_bytes(bytes(range(256)))
    (tmp_path / "empty").write_text("")
    (tmp_path / "deep").write_text("a = " + "[" * 5000)
    fails(["rate", str(tmp_path / "none"), *out], "no such file", capsys)
    fails(["column", str(tmp_path), *out], "a folder, expected a TOML file", capsys)
    fails(["rate", str(tmp_path / "binary"), *out], "not a TOML file", capsys)
    fails(["column", str(tmp_path / "empty"), *out], "key mixture is missing", capsys)
    fails(["flux", str(tmp_path / "empty"), *out], "expected one of the tables [film] and [interface]", capsys)
    fails(["flux", str(tmp_path / "deep"), *out], "not a TOML file", capsys)
    fails(["catalogue", "unobtainium", *out], "no correlation has 'unobtainium' in its record", capsys)
    (tmp_path / "case.toml").write_text("")
    with pytest.raises(SystemExit) as stop:
        main(["rate"])
    assert stop.value.code == BAD_INPUT
    capsys.readouterr()
    assert main(["new", str(tmp_path)]) == BAD_INPUT
    assert "exists already, nothing was written" in capsys.readouterr().err
    assert main([]) == BAD_INPUT
    assert not (tmp_path / "profile.csv").exists()


def test_no_solution_has_its_own_code(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A recovery that the bounds of the reflux ratio exclude: exit code 1."""
    case = tmp_path / "case.toml"
    case.write_text(spoiled((TEMPLATES / "column.toml").read_text(), "reflux_ratio = 2.0",
                            'purity = {component = "methanol", fraction = 0.9999, bounds = [1.0, 3.0]}'))
    fails(["column", str(case), "--out", str(tmp_path / "out")], "no solution", capsys, NO_SOLUTION)


# ------------------------------------------------------------------------------------------------------------- calls
KAPPA = np.array([[1.0, 0.03, 0.05], [0.03, 1.0, 0.04], [0.05, 0.04, 1.0]])
X, Y = np.array([0.3, 0.3, 0.4]), np.array([0.5, 0.3, 0.2])
MIX = rb.ConstantVolatility(["a", "b", "c"], [4.0, 2.0, 1.0], 3e4, a=21.0, b=3600.0)
VAPOR = rb.Bulk(Y, np.array(350.0), KAPPA, np.array(60.0), np.array(35.0))
LIQUID = rb.Bulk(X, np.array(345.0), 1e-2 * KAPPA, np.array(2000.0), np.array(12000.0))
TRAY = dict(diameter=1.0, spacing=0.5, weir_height=0.05, hole_diameter=0.005, hole_area_fraction=0.1)


def film(x0: Any = Y, xd: Any = X, kappa: Any = KAPPA, c_t: Any = 35.0, closure: Any = None, **more: Any) -> Any:
    return rb.krishna_standart(x0, xd, kappa, c_t, closure or Equimolar(), **more)


def interface(vapor: dict[str, Any] | None = None, liquid: dict[str, Any] | None = None, P: Any = 1e5) -> Any:
    from dataclasses import replace
    return rb.interface_flux(replace(VAPOR, **(vapor or {})), replace(LIQUID, **(liquid or {})), MIX, P)


def column(**changed: Any) -> Any:
    arguments: dict[str, Any] = {
        "stages": 8, "feeds": [Feed(4, [3.0, 3.0, 4.0], vapor_fraction=0.0)], "pressure": 1e5,
        "condenser": TotalCondenser(), "reboiler": Reboiler(),
        "specifications": [RefluxRatio(2.0), DistillateRate(5.0)]}
    return rb.Column(**(arguments | changed))


def profile(**changed: Any) -> Any:
    frame = pd.read_csv(TEMPLATES / "profile.csv").astype({"P_Pa": float})
    feed = rb.ProfileFeed(6, "liquid", 30.0, np.array([0.4, 0.2, 0.4]), 346.0)
    for name, value in changed.items():
        frame.loc[2, name] = value
    return rb.StageProfile.from_frame(frame, ["methanol", "2-propanol", "water"], feeds=[feed])


def two_liquids() -> Any:
    names = ["ethanol", "1-butanol", "water"]
    mixture = ThermoProperties.from_names(names, "unifac-modified", T_range=(300.0, 400.0))
    liquid = rb.Bulk(np.array([0.02, 0.08, 0.9]), np.array(350.0), 1e-2 * KAPPA, np.array(2000.0), np.array(3e4))
    return rb.interface_flux(VAPOR, liquid, mixture, 1e5)


CALLS: list[tuple[str, Callable[[], Any], type[Exception], str]] = [
    ("a negative fraction", lambda: film(x0=[-0.1, 0.6, 0.5]), InputError, r"\[0\] = -0.1"),
    ("fractions that do not sum to one", lambda: film(x0=[0.5, 0.5, 0.1]), InputError, "sum to 1.1"),
    ("not a number", lambda: film(x0=[np.nan, 0.5, 0.5]), InputError, r"\[0\] = nan"),
    ("infinity", lambda: film(c_t=np.inf), InputError, "c_t = inf"),
    ("a text", lambda: film(c_t="thick"), InputError, "c_t: expected numbers"),
    ("another number of components", lambda: film(xd=[0.5, 0.5]), InputError, "xd|components|shape"),
    ("a matrix that is not symmetric", lambda: film(kappa=KAPPA + np.triu(KAPPA, 1)), InputError, "symmetric"),
    ("a coefficient of zero", lambda: film(kappa=KAPPA * np.array([1.0, 0.0, 1.0])), InputError, "above zero"),
    ("a kappa of another size", lambda: film(kappa=np.eye(4)), InputError, r"expected shape \(..., 3, 3\)"),
    ("batches that do not broadcast", lambda: film(x0=np.tile(Y, (2, 1)), xd=np.tile(X, (3, 1))), InputError,
     "shape|broadcast"),
    ("a stagnant component that is not there", lambda: film(closure=Stagnant(5)), InputError, "component = 5"),
    ("a component by name where an index is due", lambda: Stagnant("a"), InputError,  # type: ignore[arg-type]
     "expected the index of one component"),
    ("a closure of zeros", lambda: film(closure=LinearBootstrap(np.zeros(3))), InputError, "nu"),
    ("a flux ratio that is no number", lambda: FluxRatio(0, np.nan), InputError, "z = nan"),
    ("a liquid inside its spinodal", lambda: film(gamma=np.array([[-0.5, 0.0], [0.0, 1.0]])), UnstableMixtureError,
     "eigenvalue"),
    ("a liquid that splits in two at an interface", two_liquids, UnstableMixtureError, "the liquid would split in two"),
    ("effective: a negative density", lambda: effective(Y, X, KAPPA, -1.0, Equimolar()), InputError, "c_t = -1.0"),
    ("degrees Celsius at an interface", lambda: interface({"temperature": -20.0}), InputError, "temperature"),
    ("no heat transfer", lambda: interface({"heat_transfer": 0.0}), InputError, "heat_transfer"),
    ("a negative pressure", lambda: interface(P=-1e5), InputError, "P = -100000.0"),
    ("a liquid of two components for three", lambda: interface(liquid={"composition": [0.5, 0.5]}), InputError,
     "components"),
    ("a mixture of nothing", lambda: rb.ConstantVolatility([], [], 1.0, a=1.0, b=1.0), InputError, "names"),
    ("a name twice", lambda: rb.ConstantVolatility(["a", "a"], [1.0, 2.0], 1.0, a=1.0, b=1.0), InputError, "distinct"),
    ("a volatility of zero", lambda: rb.ConstantVolatility(["a", "b"], [1.0, 0.0], 1.0, a=1.0, b=1.0), InputError,
     r"volatility\[1\] = 0.0"),
    ("a component nobody knows", lambda: ThermoProperties.from_names(["water", "unobtainium"]), InputError,
     "unobtainium"),
    ("a gas above its critical temperature as a liquid", lambda: ThermoProperties.from_names(["nitrogen", "water"],
     T_range=(280.0, 380.0)), InputError, "nitrogen"),
    ("a henry constant that nobody has", lambda: ThermoProperties.from_names(["nitrogen", "acetone"],
     henry=["nitrogen"], T_range=(280.0, 350.0)), InputError, "no constant of nitrogen in acetone"),
    ("parameters of the wrong size", lambda: Nrtl(3, tau_a=np.zeros((2, 2))), InputError, "tau"),
    ("a temperature outside the bank", lambda: ThermoProperties.from_names(["water"], "ideal", T_range=(300.0, 400.0))
     .k_value(np.array(450.0), np.array(1e5), np.ones(1), np.ones(1)), PropertyRangeError, "450"),
    ("a weir above the next tray", lambda: SieveTray(**(TRAY | {"weir_height": 0.6})), InputError, "weir_height = 0.6"),
    ("millimeters for meters", lambda: SieveTray(**(TRAY | {"weir_height": 50.0})), InputError, "weir_height = 50.0"),
    ("per cent for a fraction", lambda: SieveTray(**(TRAY | {"hole_area_fraction": 10.0})), InputError, "below 0.35"),
    ("coefficients on no area", lambda: FixedCoefficients(0.03, 2e-4, 0.0, h_vapor=60.0, h_liquid=900.0), InputError,
     "area = 0.0"),
    ("one specification too few", lambda: column(specifications=[RefluxRatio(2.0)]), InputError, "1 given"),
    ("the same specification twice", lambda: column(specifications=[RefluxRatio(2.0), RefluxRatio(3.0)]), InputError,
     "given 2 times"),
    ("no feed", lambda: column(feeds=[]), InputError, "needs at least one"),
    ("a feed of nothing", lambda: Feed(4, [0.0, 0.0, 0.0], vapor_fraction=0.0), InputError, "all zero"),
    ("a feed at a temperature and a vapour fraction", lambda: Feed(4, [1.0], 300.0, 0.5), InputError, "give either"),
    ("a pressure for other stages", lambda: column(pressure=[1e5] * 7), InputError, "expected one number or 8"),
    ("an absorber without liquid", lambda: column(condenser=None, reboiler=None, specifications=[],
     feeds=[VaporFeed(8, [1.0, 1.0, 1.0], 300.0)]), InputError, "no condenser and no liquid feed"),
    ("an absorber without gas", lambda: column(condenser=None, reboiler=None, specifications=[],
     feeds=[LiquidFeed(1, [1.0, 1.0, 1.0], 300.0)]), InputError, "no reboiler and no vapour feed"),
    ("a feed of other components than the model", lambda: rb.solve_equilibrium(column(
        feeds=[Feed(4, [5.0, 5.0], vapor_fraction=0.0)]), MIX), InputError, "the property model has 3"),
    ("degrees Celsius in a profile", lambda: profile(T_K=70.0), InputError, "degrees Celsius"),
    ("bar in a profile", lambda: profile(P_Pa=1.01), InputError, "bar or kPa"),
    ("no flow in a profile", lambda: profile(L_mol_s=0.0), InputError, "above zero"),
    ("a fraction above one in a profile", lambda: profile(x_water=1.2), InputError, "between 0 and 1"),
    ("a profile with a hole", lambda: profile(y_water=np.nan), InputError, "row 3, column y_water"),
    ("a scatter of 500 per cent", lambda: Uncertainty(vapor=5.0), InputError, "vapor = 5.0"),
    ("samples that are no power of two", lambda: Uncertainty(samples=100), InputError, "power of two"),
]


@pytest.mark.parametrize(("call", "error", "message"), [row[1:] for row in CALLS], ids=[row[0] for row in CALLS])
def test_call(call: Callable[[], Any], error: type[Exception], message: str) -> None:
    with pytest.raises(error, match=message):
        call()


def test_doubtful_input_warns(tmp_path: Path) -> None:
    """What is legal but looks wrong is let through with a warning of its own category."""
    with pytest.warns(PlausibilityWarning, match="renormalised"):
        profile(x_water=0.17050)
    case = tmp_path / "case.toml"
    (tmp_path / "profile.csv").write_text((TEMPLATES / "profile.csv").read_text())
    case.write_text(spoiled((TEMPLATES / "rate.toml").read_text(), "diameter_m = 1.1", "diameter_m = 0.80"))
    from ratebased.case import read_rate_case
    table = read_rate_case(case).rate()
    assert any("above flooding" in text for text in table.flags())


def test_there_are_enough() -> None:
    assert len(RATE) + len(COLUMN) + len(FLUX) + len(FILMS) + len(CALLS) >= 60
