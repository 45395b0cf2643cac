"""What is to be said about a drawing: losses, doubts, and content that could not be read."""

from __future__ import annotations

from collections.abc import Callable

from ingest.dxf.account import Account
from ingest.dxf.blocks import BlockBook
from ingest.dxf.draw import Drawer, Drawn
from ingest.dxf.loading import Loaded
from ingest.trail import Finding, Severity, Source

_UNREAD = (
    ("unreadable proxy", "proxy", "proxies of another program, which no reader can open; walls may be among them"),
    ("unreadable object", "foreign-object", "objects of another program that cannot be read; walls may be among them"),
    ("3D solid", "solid-not-read", "3D solids or regions, which are not read; have their outlines drawn as polylines"),
    ("other drawing attached", "external-reference", "attached other drawings; bind them in or name those files too"),
    ("incomplete", "incomplete-entity", "entities without a coordinate they need"),
    ("coordinate not finite", "coordinate-out-of-reach", "entities whose coordinates are no place on earth"),
    ("spline cannot", "spline-not-drawn", "splines that cannot be drawn"),
    ("insert of a block that is not", "block-missing", "inserts of blocks the file does not have"),
    ("insert of a block that holds itself", "block-cycle", "inserts of a block that holds itself"),
    ("insert that gives more", "insert-too-large", "inserts that give too many figures"),
    ("embedded object", "embedded-object", "embedded objects of other programs"),
    ("underlay", "underlay", "underlays kept in other files"),
    ("lost in reading", "lost-in-reading", "entities that the file holds but the library dropped"),
)


def report_losses(account: Account, loaded: Loaded, drawn: Drawn, book: BlockBook) -> tuple[str, ...]:
    """What was lost on the way, one line each, for the ledger."""
    losses = [f"{count} {kind} lost in reading" for kind, count in sorted(account.lost.items())]
    losses += [f"recovery: {words}" for words in loaded.repairs[:5]]
    if len(loaded.repairs) > 5:
        losses.append(f"recovery: {len(loaded.repairs) - 5} more repairs")
    losses += [f"inside blocks: {count} x {why}" for why, count in sorted(_serious(book).items())]
    broken = ("incomplete", "coordinate not finite", "spline cannot", "cannot be read")
    for why, count in sorted(drawn.aside["ignored"].items()):
        if any(word in why for word in broken):
            losses.append(f"{count} x {why}")
    return tuple(losses)


def _serious(book: BlockBook) -> dict[str, int]:
    known = ("empty text", "attribute definition", "mask", "hidden", "dimension", "viewport", "leader")
    return {why: count for why, count in book.left.items() if not why.startswith(known)}


def report_findings(
    file: str, account: Account, repeated: tuple[str, ...], loaded: Loaded, drawn: Drawn, drawer: Drawer
) -> tuple[Finding, ...]:
    """Findings on one drawing, in a fixed order."""
    found: list[Finding] = []

    def see(code: str, severity: Severity, text: str, items: tuple[str, ...] = ()) -> None:
        sources = tuple(Source(file=file, item=item) for item in items)
        found.append(Finding(id=f"{code}:{file}", code=code, severity=severity, where=file, text=text, sources=sources))

    if loaded.recovered:
        see("recovered", "check", f"read in recovery mode ({loaded.recovered}); compare the counts with the drawing")
    if account.lost:
        lost = ", ".join(f"{count} {kind}" for kind, count in sorted(account.lost.items()))
        see("lost-in-reading", "check", f"entities that the file holds were not read: {lost}")
    if repeated:
        shown = ", ".join(repeated[:3])
        words = f"{len(repeated)} handles stand at more than one entity ({shown})"
        see("handle-twice", "check", words, repeated[:3])
    for start, code, words in _UNREAD[:-1]:
        counts = {why: n for kind in drawn.aside.values() for why, n in kind.items() if why.startswith(start)}
        inside = sum(n for why, n in drawer.book.left.items() if why.startswith(start))
        if counts or inside:
            first = tuple(drawn.examples[why] for why in sorted(counts) if why in drawn.examples)[:3]
            blocks = f", {inside} more inside blocks" if inside else ""
            see(code, "check", f"{sum(counts.values())} {words}{blocks}", first)
    _see_layers(drawn, drawer, see)
    paper = account.aside.get("paper space", 0)
    if paper:
        see("paper-space", "note", f"{paper} entities on layout sheets (paper space) are not read")
    return tuple(found)


def _see_layers(drawn: Drawn, drawer: Drawer, see: Callable[[str, Severity, str], None]) -> None:
    hidden = sorted({(p.layer, p.tags["layer_state"]) for p in drawn.parts if "layer_state" in p.tags})
    if hidden:
        shown = ", ".join(f"{layer} ({state})" for layer, state in hidden[:6]) + (" ..." if len(hidden) > 6 else "")
        see("layer-hidden", "check", f"read although their layers are off or frozen in the drawing: {shown}")
    if drawn.xrefs:
        see("external-reference-names", "note", "attached by reference: " + ", ".join(sorted(drawn.xrefs)[:6]))
    used = {p.layer for p in drawn.parts} | drawer.layers.names
    folded = {name.casefold() for name in used}
    for wanted in sorted(drawer.layers.ignored - folded):
        near = drawer.layers.nearest(wanted, used)
        hint = f'; the nearest is "{near}"' if near else ""
        words = f'the brief leaves out the layer "{wanted}", which the drawing does not have{hint}'
        see("layer-unknown", "check", words)
