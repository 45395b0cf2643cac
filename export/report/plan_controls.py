"""Controls of plan and ribbon. Output and layers work by style alone; slider and zoom need the small script."""

from __future__ import annotations

import json

from export.report.along import Perimeter
from export.report.markup import Html, tag
from export.report.words import VERDICT_NAMES, output_name, station_sentence
from sections.model import Pit
from sections.proposal import Proposal, StationTable

LAYERS = (
    ("supports", "supports"),
    ("loads", "loads"),
    ("zones", "zones and chainage"),
    ("corners", "corners"),
    ("cuts", "cuts"),
    ("stands", "represented by"),
    ("boreholes", "boreholes"),
    ("symmetry", "mirror axes"),
    ("grid", "grid"),
)


def outputs_of(proposal: Proposal) -> list[str]:
    """Outputs that have stations, in order."""
    found: dict[str, None] = {}
    for table in proposal.stations.values():
        found.update(dict.fromkeys(table.outputs))
    return list(found)


def output_controls(proposal: Proposal) -> Html:
    """Which output the plan's verdict line shows."""
    picks = [_pick("governing", "worst of the governing outputs", True)]
    picks += [_pick(name, output_name(name).lower(), False) for name in outputs_of(proposal)]
    return tag("fieldset", tag("legend", "Verdict line shows"), *picks, class_="controls")


def _pick(key: str, words: str, chosen: bool) -> Html:
    box = tag("input", type="radio", name="output", id=f"show-{key}", checked=chosen)
    return tag("label", box, tag("span", words), for_=f"show-{key}")


def output_rules(proposal: Proposal) -> str:
    """Style rules that show the picked output and hide unticked layers."""
    rules = [".output-band { display: none; }"]
    rules += [
        f"#plan:has(#show-{key}:checked) .for-{key} {{ display: inline; }}"
        for key in ("governing", *outputs_of(proposal))
    ]
    rules += [f"#plan:has(#layer-{key}:not(:checked)) .layer-{key} {{ display: none; }}" for key, _ in LAYERS]
    return "\n".join(rules) + "\n"


def layer_controls() -> Html:
    """Layers on and off."""
    boxes = [
        tag(
            "label",
            tag("input", type="checkbox", id=f"layer-{key}", checked=True),
            tag("span", words),
            for_=f"layer-{key}",
        )
        for key, words in LAYERS
    ]
    return tag("fieldset", tag("legend", "Layers"), *boxes, class_="controls")


def zoom_controls() -> Html:
    """Zoom by buttons; shown when scripts run."""
    buttons = [
        tag("button", words, type="button", data_zoom=how)
        for how, words in (("in", "Zoom in"), ("out", "Zoom out"), ("all", "Whole plan"))
    ]
    return tag(
        "div",
        *buttons,
        tag("span", "or drag, and turn the wheel with Ctrl held", class_="hint"),
        class_="controls scripted",
        id="zoom",
        hidden=True,
    )


def station_slider(pit: Pit) -> Html:
    """A slider along one perimeter and what is said at the chosen station."""
    key = f"station-{pit.id}"
    readout = tag("div", class_="readout", id=f"{key}-says", aria_live="polite")
    slider = tag("input", type="range", id=key, min="0", max="0", value="0", step="1", data_pit=pit.id)
    return tag(
        "div",
        tag("label", f"Station along {pit.id}", for_=key),
        slider,
        readout,
        class_="station scripted",
        hidden=True,
    )


def station_data(proposal: Proposal) -> Html:
    """What the slider needs, as data the browser never runs."""
    pits = {pit.id: _pit_data(pit, proposal.stations[pit.id]) for pit in proposal.pits if pit.id in proposal.stations}
    words = {"verdicts": VERDICT_NAMES, "outputs": {o: output_name(o) for o in outputs_of(proposal)}}
    text = data_text({"pits": pits, "words": words})
    return Html(f'<script type="application/json" id="stations">{text}</script>\n')


def data_text(tree: object) -> str:
    """JSON that may stand in a page: no character of it can end its element."""
    text = json.dumps(tree, separators=(",", ":"), ensure_ascii=True, allow_nan=False)
    for mark, escaped in (("<", "\\u003c"), (">", "\\u003e"), ("&", "\\u0026")):
        text = text.replace(mark, escaped)
    return text


def _pit_data(pit: Pit, table: StationTable) -> dict[str, object]:
    line = Perimeter.of(pit)
    sentences: dict[str, int] = {}
    said = {}
    for name, output in table.outputs.items():
        rows = zip(output.verdict, output.low, output.high, output.dominant, strict=True)
        said[name] = [
            [word, sentences.setdefault(station_sentence(word, low, high, dominant), len(sentences))]
            for word, low, high, dominant in rows
        ]
    return {
        "chainage": [round(c, 3) for c in table.chainage],
        "xy": [[round(v, 3) for v in line.point(c)] for c in table.chainage],
        "section": list(table.section),
        "says": said,
        "sentences": list(sentences),
    }
