"""The first pit as received: piles, struts, waler, footing, one borehole.

Wall axis (100, 200) to (130, 220), 100 contiguous piles D 0.75 m at 1.00 m, one level of struts at -1.50, footing
3.0 x 2.0 m behind the north wall. Figures: A = pi D^2/4 = 0.441786 m2, I = pi D^4/64 = 0.0155316 m4 (geometry);
E = 33e6 kPa (C30/37, EN 1992-1-1 table 3.1, recalled); CHS 508x16 A = pi (0.508^2 - 0.476^2)/4 = 0.0247306 m2,
E = 210e6 kPa (EN 1993-1-1 cl. 3.2.6, recalled), so EA = 5193429.65 kN and at 5 m EA' = 1038685.93 kN/m.
"""

from __future__ import annotations

from math import pi

from ingest.members import BarSection, Load, Pile, Plate, Support, Waler
from ingest.model import Borehole, Frame, InputFile, Layer, Registered, Site
from ingest.trail import Source

D, CENTRES, E_CONCRETE, E_STEEL = 0.75, 1.0, 33.0e6, 210.0e6
PILE_A, PILE_I = pi * D**2 / 4, pi * D**4 / 64
CHS_A = pi * (0.508**2 - 0.476**2) / 4
STRUT_EA = E_STEEL * CHS_A
DRAWING = "first_pit.dxf"
BRIEF = "first_pit.toml"
CORNERS = ((100.0, 200.0), (130.0, 200.0), (130.0, 220.0), (100.0, 220.0))
LENGTH, STEP = 100.0, 0.5
HE = 6.0


def source(item: str, how: str = "read", file: str = DRAWING) -> Source:
    return Source(file=file, item=item, how=how)  # type: ignore[arg-type]


def point_at(chainage: float) -> tuple[float, float]:
    """Point of the first pit's wall axis at a chainage."""
    c = chainage % LENGTH
    if c <= 30:
        return (100 + c, 200.0)
    if c <= 50:
        return (130.0, 200 + c - 30)
    if c <= 80:
        return (130 - (c - 50), 220.0)
    return (100.0, 220 - (c - 80))


def struts() -> tuple[Support, ...]:
    bar = BarSection(designation="CHS 508x16", A=CHS_A, diameter=0.508)
    across = [((x, 220.0, -1.5), (x, 200.0, -1.5)) for x in (102.5, 107.5, 112.5, 117.5, 122.5, 127.5)]
    along = [((100.0, y, -1.5), (130.0, y, -1.5)) for y in (202.5, 207.5, 212.5, 217.5)]
    return tuple(
        Support(
            id=f"strut-{n}", role="strut", head=head, far=far, section=bar, EA=STRUT_EA, layer="STRUTS", waler=True,
            sources=(source(f"2{n:02X}"),),
        )
        for n, (head, far) in enumerate(across + along, start=1)
    )  # fmt: skip


def piles() -> tuple[Pile, ...]:
    return tuple(
        Pile(
            id=f"pile-{n}", centre=point_at(float(n)), diameter=D, kind="contiguous", top=0.0, toe=-12.0,
            layer="WALL-PILES-CONTIGUOUS", sources=(source(f"1{n:02X}"),),
        )
        for n in range(100)
    )  # fmt: skip


FOOTING = ((113.5, 222.0), (116.5, 222.0), (116.5, 224.0), (113.5, 224.0))


def site(title: str = "First pit (invented)") -> Site:
    return Site(
        name=title,
        date="2026-01-15",
        inputs=(
            InputFile(
                file=DRAWING, sha256="ab" * 32, kind="dxf", schema_or_version="AC1032", length_unit="m",
                registered=Registered(),
            ),
            InputFile(
                file=BRIEF, sha256="cd" * 32, kind="brief", schema_or_version="TOML", length_unit="m", registered=None
            ),
        ),
        frame=Frame(),
        ground_level=0.0,
        formation=-6.0,
        wall_top=0.0,
        piles=piles(),
        supports=struts(),
        walers=(Waler(id="waler-1", points=(*CORNERS, CORNERS[0]), level=-1.5, sources=(source("300"),)),),
        plates=(Plate(id="footing-1", role="footing", outline=FOOTING, top=-0.5, underside=-1.0),),
        loads=(Load(id="load-1", kind="footing", value=150.0, points=FOOTING, level=-1.0, sources=(source("310"),)),),
        boreholes=(
            Borehole(
                id="BH1",
                location=(120.0, 228.0, 0.0),
                layers=(Layer(top=0.0, base=-3.0, code="MG"), Layer(top=-3.0, base=-20.0, code="CLAY")),
                water=None,
            ),
        ),
    )  # fmt: skip
