"""Words and figures of the report: verdicts, outputs, stretches, numbers with their units."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import floor, log10

from ingest.trail import Source
from sections.proposal import Represents, Unrepresented, Verdict

NARROW = "\u202f"
MINUS = "\u2212"
NOT_GIVEN = "not given"

OUTPUT_NAMES = {
    "wall_deflection": "Wall deflection",
    "wall_moment_excavated_face": "Wall moment (excavated face)",
    "wall_moment_retained_face": "Wall moment (retained face)",
    "support_force": "Support force",
    "settlement": "Settlement",
    "heave_utilisation": "Heave utilisation",
    "hydraulic_utilisation": "Hydraulic utilisation",
    "hoop_force": "Hoop force",
}
VERDICT_NAMES: dict[str, str] = {
    "holds": "holds",
    "over_states": "over-states",
    "undecided": "undecided",
    "not_assessed": "not assessed",
    "under_states": "under-states",
    "not_two_dimensional": "not two-dimensional",
}
VERDICT_MEANS: dict[str, str] = {
    "holds": "the two-dimensional idealisation is judged adequate for this output and stage",
    "over_states": "the 2D answer is too large for this output and stage; not a margin for anything else",
    "undecided": "the band straddles the upper limit; it represents provisionally at most",
    "not_assessed": "nothing could be said of this output",
    "under_states": "the 2D answer is too small: do not rely on it",
    "not_two_dimensional": "no direction repeats: needs 3D or another idealisation",
}
ROLE_NAMES = {
    "strut": "struts",
    "corner_strut": "corner struts",
    "raker": "rakers",
    "anchor": "anchors",
    "waler": "walers",
    "bearing_pile": "bearing piles",
    "slab": "slabs",
    "footing": "footings",
    "column": "columns",
}
KIND_OF_WALL = {
    "diaphragm": "diaphragm wall",
    "secant": "secant piles",
    "contiguous": "contiguous piles",
    "sheet": "sheet piles",
    "king_post": "king posts",
    "concrete": "concrete wall",
    "masonry": "masonry wall",
    "none": "no wall",
    "unknown": "kind of wall unknown",
}
KIND_NAMES = {"plane_strain": "plane strain", "axisymmetric": "axisymmetric"}


def output_name(output: str) -> str:
    """Name of an output as the engineer reads it."""
    return OUTPUT_NAMES.get(output, output.replace("_", " "))


def fixed(value: float | None, places: int = 2, unit: str = "") -> str:
    r"""A number with fixed places, a true minus and its unit.

    Example:
        >>> fixed(-6.0, 2, "m"), fixed(None)
        ('−6.00\u202fm', 'not given')
    """
    if value is None:
        return NOT_GIVEN
    shown = f"{value:.{places}f}"
    if float(shown) == 0:
        shown = shown.lstrip("-")
    return shown.replace("-", MINUS) + (NARROW + unit if unit else "")


def level(value: float | None) -> str:
    """A level with its sign.

    Example:
        >>> level(0.0), level(1.5), level(-6.0)
        ('±0.00', '+1.50', '−6.00')
    """
    if value is None:
        return NOT_GIVEN
    shown = fixed(value, 2)
    return "±0.00" if shown == "0.00" else shown if value < 0 else f"+{shown}"


def figure(value: float | None, unit: str = "", digits: int = 5) -> str:
    r"""A figure to some significant digits with thousands set apart.

    Example:
        >>> figure(1038685.93), figure(0.2), figure(-61.2, "kN/m")
        ('1\u202f038\u202f700', '0.2', '−61.2\u202fkN/m')
    """
    if value is None:
        return NOT_GIVEN
    return _grouped(value, digits) + (NARROW + unit if unit else "")


def _grouped(value: float, digits: int) -> str:
    if value == 0:
        return "0"
    size = floor(log10(abs(value)))
    if size < -4 or size > 11:
        return f"{value:.{digits - 1}e}".replace("-", MINUS)
    rounded = round(value, digits - 1 - size)
    shown = f"{rounded:.{max(digits - 1 - size, 0)}f}"
    if "." in shown:
        shown = shown.rstrip("0").rstrip(".")
    sign, whole = (MINUS, shown[1:]) if shown.startswith("-") else ("", shown)
    integer, point, rest = whole.partition(".")
    groups = []
    while len(integer) > 3:
        integer, group = integer[:-3], integer[-3:]
        groups.append(group)
    return sign + NARROW.join([integer, *reversed(groups)]) + point + rest


def band(low: float | None, high: float | None) -> str:
    """A band of the ratio real over 2D, both ends.

    Example:
        >>> band(0.85, 1.02), band(None, None)
        ('0.85 to 1.02', 'no band')
    """
    if low is None and high is None:
        return "no band"
    ends = ("?" if low is None else fixed(low), "?" if high is None else fixed(high))
    return f"{ends[0]} to {ends[1]}"


def station_sentence(word: str, low: float | None, high: float | None, dominant: str | None) -> str:
    """What is said of one output at one station, in a sentence."""
    if low is None and high is None:
        return f"{VERDICT_NAMES[word]}: {VERDICT_MEANS[word]}."
    cause = f" Governed by {criterion_name(dominant)}." if dominant else ""
    return f"Real demand {band(low, high)} times the 2D value: {VERDICT_NAMES[word]}.{cause}"


def criterion_name(code: str) -> str:
    """A criterion's code in words.

    Example:
        >>> criterion_name("corner.class_table")
        'corner, class table'
    """
    return code.replace(".", ", ").replace("_", " ")


def provisional_mark(verdict: Verdict) -> str:
    """Mark behind the word of a verdict that rests on inputs nobody has confirmed; one without a band needs none."""
    return " (provisional)" if verdict.provisional and verdict.verdict != "not_assessed" else ""


def source_tail(sources: Sequence[Source], most: int = 2) -> str:
    """Sources behind a tooltip's words, none when there are none."""
    if not sources:
        return ""
    shown = ", ".join(f"{one.file} {one.item} ({one.how})" for one in sources[:most])
    more = f" and {len(sources) - most} more" if len(sources) > most else ""
    return f"; from {shown}{more}"


def stretch(pit: str, start: float, to: float) -> str:
    """A stretch of perimeter by its chainages."""
    return f"{pit} ch {fixed(start)} to {fixed(to)}"


def run_length(start: float, to: float, length: float) -> float:
    """Length of a stretch; `to < start` passes the start of the perimeter.

    Example:
        >>> run_length(98.5, 1.5, 100.0), run_length(0.0, 100.0, 100.0)
        (3.0, 100.0)
    """
    return to - start if to >= start else to - start + length


def metres(items: Iterable[Represents | Unrepresented], lengths: dict[str, float]) -> float:
    """Total length of some stretches, m."""
    return sum(run_length(item.start, item.to, lengths.get(item.pit, 0.0)) for item in items)


def count(number: int, thing: str) -> str:
    """A count with its noun.

    Example:
        >>> count(1, "section"), count(2, "section"), count(0, "question")
        ('1 section', '2 sections', 'no questions')
    """
    return f"{number or 'no'} {thing}{'' if number == 1 else 's'}"
