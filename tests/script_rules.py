"""The checks a script can make of a section and a proposal, written anew from the contract: JSON and nothing else."""

from __future__ import annotations

from collections.abc import Iterator
from math import hypot, isclose, prod
from typing import Any

Json = dict[str, Any]
STANDS_ON = {"ground", "axis", "opposite"}
WORST = ("not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds")


def smear_faults(section: Json) -> Iterator[str]:
    """Real value x factor = section value; factor = product of its parts; preload comes back."""
    for member in section["members"]:
        for row in member["smear"]:
            real, made = member["real"][row["real_key"]], member["section"][row["section_key"]]
            if not isclose(real * row["factor"], made, rel_tol=1e-7):
                yield f"{member['id']} {row['quantity']}: {real} x {row['factor']} is not {made}"
            if not isclose(prod(row["parts"].values()), row["factor"], rel_tol=1e-7):
                yield f"{member['id']} {row['quantity']}: parts do not make the factor"
        for key, unit in (("preload_kN_per_m", "kN/m"), ("preload_kN_per_rad", "kN/rad")):
            made = member["section"].get(key)
            backs = [b["factor"] for b in member["back"] if b["quantity"] == "N" and b["from_unit"] == unit]
            if made is not None and not any(
                isclose(made * f, member["real"]["preload_kN"], rel_tol=1e-7) for f in backs
            ):
                yield f"{member['id']}: preload does not come back"


def stiffness_faults(section: Json) -> Iterator[str]:
    """k_effective = EA over the length drawn; that length is the true one (or L_eff) times the cosine out of plane."""
    for member in section["members"]:
        values = member["section"]
        EA, k = values.get("EA_kN_per_m"), values.get("k_effective_kN_per_m_per_m")
        if member["form"] != "bar" or EA is None or k is None:
            continue
        (x1, z1), (x2, z2) = member["points"]
        if not isclose(EA / hypot(x2 - x1, z2 - z1), k, rel_tol=1e-6):
            yield f"{member['id']}: k_effective is not EA over the length drawn"


def id_faults(section: Json) -> Iterator[str]:
    """Every end, material, load, water line and stage names something that is there, and no id stands twice."""
    ids = [member["id"] for member in section["members"]]
    known = {*ids, *STANDS_ON}
    if len(ids) != len(set(ids)):
        yield f"ids twice: {sorted(ids)}"
    for member in section["members"]:
        yield from (f"{member['id']} ends at {e['to']}" for e in member["ends"] if e["to"] not in known)
        if member["material"] not in (None, *section["materials"]):
            yield f"{member['id']} is of {member['material']}"
    yield from (
        f"layer of {a['material']}" for a in section["ground"]["layers"] if a["material"] not in section["materials"]
    )
    yield from (f"no member {wall['member']}" for wall in section["walls"] if wall["member"] not in ids)
    loads, water = {one["id"] for one in section["loads"]}, {one["id"] for one in section["ground"]["water"]}
    for stage in section["stages"]:
        named = {*stage["install"], *stage["remove"], *stage["preload"]} - set(ids)
        named |= ({*stage["loads_on"], *stage["loads_off"]} - loads) | (set(stage["water"]) - water)
        yield from (f"stage {stage['id']} names {name}" for name in sorted(named))


def stretch_faults(proposal: Json) -> Iterator[str]:
    """Represented and unrepresented stretches make up each perimeter."""
    spans = [span for section in proposal["sections"] for span in section["represents"]] + proposal["unrepresented"]
    for pit in proposal["pits"]:
        total = 0.0
        for span in spans:
            if span["pit"] == pit["id"]:
                run = span["to"] - span["from"]
                total += run if run > 0 else run + pit["length"]
        if abs(total - pit["length"]) > 1e-6 * pit["length"]:
            yield f"{pit['id']}: stretches make {total} of {pit['length']}"


def ledger_faults(proposal: Json) -> Iterator[str]:
    """Entities are used, context or ignored."""
    for name, book in proposal["ledger"].items():
        if book["entities"] != book["used"] + book["context"] + book["ignored"]:
            yield f"{name}: {book['entities']} entities do not add up"


def verdict_faults(section: Json, limits: Json) -> Iterator[str]:
    """The rows of `criteria`, combined by the published rules, give band and word of every verdict."""
    for wall in section["walls"]:
        for output, verdict in wall["verdicts"].items():
            rows = [r for r in section["criteria"] if (r["wall"], r["output"]) == (wall["member"], output)]
            word, band = judge(rows, verdict, limits)
            at = f"{section['id']} {wall['member']} {output}"
            if word != verdict["verdict"]:
                yield f"{at}: rows give {word}, verdict is {verdict['verdict']}"
            told = (verdict["low"], verdict["high"])
            if (band is None) != (None in told):
                yield f"{at}: rows give {band}, verdict has {told}"
            if None in told:
                continue
            if band is None or not all(
                isclose(a, b, rel_tol=1e-6, abs_tol=1e-9) for a, b in zip(band, told, strict=True)
            ):
                yield f"{at}: rows give {band}, verdict has {told}"
    for output, verdict in section["verdicts"].items():
        words = [wall["verdicts"][output]["verdict"] for wall in section["walls"]]
        if verdict["verdict"] != min(words, key=WORST.index):
            yield f"{section['id']} {output}: {verdict['verdict']} is not the worst of {words}"


def judge(rows: list[Json], verdict: Json, limits: Json) -> tuple[str, tuple[float, float] | None]:
    """Word and band of one output at one wall.

    A gate rules; a gap lets no relief stand, but a warning that needs no margin stays; a band by class never holds.
    """
    bands, gap = hulls(rows)
    gap = gap or not verdict["margin_measured"]
    if any(row["gate"] for row in rows):
        return "not_two_dimensional", None
    if not bands:
        return "not_assessed", None
    band = combine(bands, *(verdict["margin"] or (0.0, 0.0)), limits)
    warns = combine(bands, 0.0, 0.0, limits)[1] > limits["ratio_high"] + 1e-9
    word = word_of(band, limits)
    if word == "holds" and any(row["by_class_only"] and row["assessed"] for row in rows):
        word = "undecided"
    if gap and not (warns and word in ("under_states", "undecided")):
        return "not_assessed", None
    return word, band


def hulls(rows: list[Json]) -> tuple[list[tuple[float, float]], bool]:
    """One band for each mechanism, one for each computation in place of all it carries; and whether a gap is left."""
    spoken: dict[str, tuple[float, float]] = {}
    gaps: set[str] = set()
    for row in (r for r in rows if not r["carries"]):
        if row["assessed"]:
            low, high = spoken.get(row["mechanism"], (row["low"], row["high"]))
            spoken[row["mechanism"]] = min(low, row["low"]), max(high, row["high"])
        gaps |= {row["mechanism"]} if row["gap"] else set()
    computed = []
    for row in (r for r in rows if r["carries"]):
        if row["assessed"]:
            carried = {row["mechanism"], *row["carries"]}
            held = [spoken.pop(name) for name in sorted(carried & set(spoken))]
            computed.append((min([row["low"], *(b[0] for b in held)]), max([row["high"], *(b[1] for b in held)])))
            gaps -= carried
        gaps |= {row["mechanism"]} if row["gap"] else set()
    return [*spoken.values(), *computed], bool(gaps)


def combine(bands: list[tuple[float, float]], e_low: float, e_high: float, limits: Json) -> tuple[float, float]:
    """Relief never offsets excess across mechanisms; the margin once; an excess that survives every relief stays."""
    if len(bands) == 1:
        ((low, high),) = bands
        return low - e_low * abs(low), high * (1 + e_high)
    relief, most = prod(min(1.0, max(0.0, low)) for low, _ in bands), max(high for _, high in bands)
    survives = (1 - e_low) * max(1.0, max(low for low, _ in bands)) * relief
    low = survives if survives > limits["ratio_high"] + 1e-9 else relief * (1 - e_low)
    if most <= 1.0:
        return low, max(1.0, most * (1 + e_high))
    return low, prod(max(1.0, high) for _, high in bands) * (1 + e_high)


def word_of(band: tuple[float, float], limits: Json) -> str:
    """Verdict of a band."""
    low, high = band
    if low > limits["ratio_high"] + 1e-9:
        return "under_states"
    if high > limits["ratio_high"] + 1e-9:
        return "undecided"
    return "over_states" if low < limits["ratio_low"] - 1e-9 else "holds"
