"""The brief: every key of the contract is read, every slip is named with its line, value, unit and range."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ingest.brief import Brief, read_brief
from ingest.brief_lines import find_lines
from ingest.errors import InputError

# Every key that the contract's chapter "Brief" lists, once.
WHOLE = """
[site]
name = "Yard"
date = 2026-03-02
crs = "EPSG:27700"
ground_level = 4.2
datum = "ordnance datum"
start = [530000.0, 180000.0]
[files."plan A.dxf"]
length_unit = "mm"
shift = [1.0, 2.0]
rotation_deg = 30.0
ignore_layers = ["FURN"]
[[roles]]
match = { layer = "W*", class = "LINE", name = "n", id = "2F" }
role = "wall"
wall_kind = "secant"
[levels]
formation = -6.0
top = 0.0
dig_allowance = 0.3
water_retained = -1.0
water_excavated = -6.5
[[floors]]
match = { layer = "PIT" }
level = -7.5
dig_allowance = 0.2
[[strata]]
name = "clay"
top_level = -3.0
unit_weight = 20.0
E = 40e3
E_gradient = 3000.0
nu = 0.3
K0 = 1.0
c = 2.0
phi = 24.0
su = 75.0
su_gradient = 5.0
drainage = "undrained"
permeability = 1e-10
[[strata]]
name = "sand"
from_boreholes = "SAND"
[[materials]]
id = "c"
kind = "concrete"
concrete_class = "C30/37"
unit_weight = 25.0
[[materials]]
id = "s"
kind = "steel"
E = 210e6
[[walls]]
match = { layer = "W*" }
material = "c"
EI_factor = 0.7
continuity = "jointed"
top = 0.0
toe = -12.0
[[supports]]
match = { layer = "S" }
role = "strut"
level = -1.5
inclination = 0.0
free_length = 6.0
bond_length = 5.0
bond_diameter = 0.15
section = "CHS 508x16"
material = "s"
preload = -200.0
thermal_range = 20.0
packing_stiffness = 5e5
waler = true
waler_EI = 1e5
capping_beam = false
continuous_at_corners = true
[[supports]]
EA = 5e6
[[loads]]
match = { layer = "F" }
kind = "footing"
value = 150.0
level = -1.0
stage = "dig 1"
[[loads]]
points = [[0, 0], [10, 0]]
kind = "line"
value = 20.0
[[receptors]]
points = [[0, 0], [10, 0]]
kind = "tunnel"
level = -9.0
sensitivity = "high"
[[stages]]
name = "dig 1"
dig_to = -2.0
install = ["S"]
remove = []
water = -2.5
drainage = "drained"
[[decisions.pin]]
line = [[0, 0], [10, 0]]
by = "me"
date = 2026-03-03
because = "worst"
[[decisions.forbid]]
line = [0, 0, 10, 5]
[[decisions.move]]
line = [[0, 0], [10, 0]]
to = [[0, 1], [10, 1]]
[[decisions.confirm]]
assumption = "dig-allowance"
by = "me"
date = "2026-03-03"
[limits]
ratio_low = 0.85
ratio_high = 1.15
governing = ["support_force"]
level = 0.2
"""


def written(folder: Path, text: str) -> Path:
    path = folder / "brief.toml"
    path.write_text(text, encoding="utf-8")
    return path


def problems_in(folder: Path, text: str) -> tuple[tuple[str, str, str], ...]:
    with pytest.raises(InputError) as caught:
        read_brief(written(folder, text))
    return caught.value.problems


def test_every_key_of_the_contract_is_read(tmp_path: Path) -> None:
    brief = read_brief(written(tmp_path, WHOLE))
    assert brief.site.date == "2026-03-02"
    assert brief.site.start == (530000.0, 180000.0)
    assert brief.files["plan A.dxf"].length_unit == "mm"
    assert brief.roles[0].match.cls == "LINE"
    assert brief.decisions.forbid[0].line == ((0.0, 0.0), (10.0, 5.0))
    assert brief.decisions.move[0].to == ((0.0, 1.0), (10.0, 1.0))
    assert brief.strata[1].from_boreholes == "SAND"
    assert brief.limits.ratio_high == 1.15


def test_an_empty_brief_is_a_brief(tmp_path: Path) -> None:
    assert read_brief(written(tmp_path, "")).model_dump() == Brief().model_dump()


@pytest.mark.parametrize(
    ("text", "line", "key", "remedy"),
    [
        ("[site]\n\nground_lvl = 0.0\n", 3, "ground_lvl", "ground_level"),
        ("[levels]\ntoe = -12.0\n", 2, "toe", "[walls]"),
        ("[[walls]]\n[[walls]]\nmatch = { layre = 'W' }\n", 3, "layre", "layer"),
        ("[levles]\nformation = 1\n", 1, "levles", "levels"),
        ("[limits]\nratio_hihg = 1.1\n", 2, "ratio_hihg", "ratio_high"),
        ("[[decisions.pins]]\nline = [0, 0, 1, 1]\n", 1, "pins", "pin"),
        ("[[supports]]\nmatch = { layer = 'S' }\nsection = \"a # b\"\nprelod = 1.0\n", 4, "prelod", "preload"),
    ],
)
def test_an_unknown_key_is_named_with_its_line_and_the_nearest_known_one(
    tmp_path: Path, text: str, line: int, key: str, remedy: str
) -> None:
    ((place, problem, what_to_do),) = problems_in(tmp_path, text)
    assert place.startswith(f"line {line},")
    assert f'"{key}"' in problem
    assert remedy in what_to_do


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("[levels]\nformation = -6000\n", ("-6000 m", "-1000 to 9000 m", "-6 m")),  # mm for m
        ("[levels]\nformation = nan\n", ("nan m", "-1000 to 9000 m")),
        ("[levels]\nformation = -inf\n", ("-inf m",)),
        ("[levels]\ndig_allowance = -0.5\n", ("-0.5 m", "0 to 10 m")),
        ('[levels]\nformation = "-6 m"\n', ('"-6 m"', "not a number")),
        ("[levels]\nformation = true\n", ("true", "not a number")),
        ("[[strata]]\nphi = 75\n", ("75 degrees", "0 to 60 degrees")),
        ("[[strata]]\nunit_weight = 2000\n", ("2000 kN/m3", "5 to 90 kN/m3")),
        ("[[strata]]\nnu = 0.6\n", ("0.6", "0 to 0.5")),
        ("[[strata]]\ntop_level = 0.0\nfrom_boreholes = 'A'\n", ("not both",)),
        ("[[walls]]\nEI_factor = 0\n", ("0 lies outside", "above 0 to 1")),
        ("[[walls]]\ntop = -13.0\ntoe = -12.0\n", ("-12 m", "-13 m")),
        ("[[supports]]\nEA = 0\n", ("0 kN", "above 0")),
        ("[[supports]]\nsection = 'HEB 300'\nEA = 1.0\n", ("section or EA",)),
        ("[[loads]]\nkind = 'area'\nvalue = -5\nmatch = { layer = 'L' }\n", ("-5", "kPa")),
        ("[[loads]]\nkind = 'area'\npoints = [[0, 0], [1, 1]]\n", ("at least 3 points",)),
        ("[[loads]]\nvalue = 5\n", ("match or points",)),
        ("[[roles]]\nmatch = { layer = 'A' }\nrole = 'strutt'\n", ('"strutt"',)),
        ("[[roles]]\nmatch = {}\nrole = 'strut'\n", ("match is empty",)),
        ("[limits]\nratio_high = 0.9\n", ("0.9", "1 to 10")),
        ("[limits]\ngoverning = ['moment']\n", ('"moment"',)),
        ("[[materials]]\nid = 'c'\nkind = 'steel'\nconcrete_class = 'C30/37'\n", ("does not fit",)),
        ("[[walls]]\nmaterial = 'c'\n", ('"c" is not in',)),
        ("[files.'a.dxf']\nlength_unit = 'furlong'\n", ("furlong",)),
        ("[[decisions.pin]]\nline = [[0, 0], [0, 0]]\n", ("one point",)),
        ("[[stages]]\nsequence = 'top_down'\nname = 'x'\n", ("alone",)),
    ],
)
def test_a_value_that_cannot_be_is_refused_with_unit_and_range(
    tmp_path: Path, text: str, words: tuple[str, ...]
) -> None:
    ((place, problem, remedy),) = problems_in(tmp_path, text)
    assert place.startswith("line ")
    assert all(word in problem for word in words), problem
    assert remedy


def test_all_problems_of_a_brief_come_at_once_in_the_order_of_its_lines(tmp_path: Path) -> None:
    text = "[site]\nnam = 'x'\n[levels]\nformation = nan\n[[walls]]\ncontinuity = 'jointd'\n"
    problems = problems_in(tmp_path, text)
    assert [place.split(",")[0] for place, _, _ in problems] == ["line 2", "line 4", "line 6"]
    assert "jointed" in problems[2][2]


@pytest.mark.parametrize(
    ("raw", "words"),
    [(b"[site\n", "line 1"), (b"[site]\nname = \xff\n", "UTF-8"), (b"a = 1\na = 2\n", "TOML")],
)
def test_what_is_no_toml_is_told_with_its_place(tmp_path: Path, raw: bytes, words: str) -> None:
    path = tmp_path / "b.toml"
    path.write_bytes(raw)
    with pytest.raises(InputError) as caught:
        read_brief(path)
    assert words in str(caught.value)


def test_a_missing_brief_is_told(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="cannot be read"):
        read_brief(tmp_path / "none.toml")


VALUES = (
    "1",
    '"a = [#"',
    "[1,\n  2, # ]\n  3]",
    '"""x\n[[y]]\nz = 1"""',
    "'''\n]'''",
    "{ a = 1, b = [2] }",
    "-1e3 # c = 4",
)


@given(
    st.lists(
        st.tuples(st.sampled_from(["[t]", "[[u]]", ""]), st.lists(st.sampled_from(VALUES), max_size=3)), max_size=5
    )
)
def test_each_key_has_the_line_it_was_written_on(blocks: list[tuple[str, list[str]]]) -> None:
    text, expected, key, count, table = "", {}, 0, {"t": 0, "u": 0}, ()
    for header, values in blocks:
        if header == "[t]" and count["t"]:
            continue
        if header:
            name = header.strip("[]")
            table = (name,) if name == "t" else (name, count["u"])
            count[name] += 1
            text += header + "\n"
        for value in values:
            key += 1
            expected[(*table, f"k{key}")] = text.count("\n") + 1
            text += f"k{key} = {value}\n\n# note = 1\n"
    lines = find_lines(text)
    assert {path: lines[path] for path in expected} == expected
