"""What is to be said about a drawing: losses, doubts, and content that could not be read."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from ingest.dxf.account import Account
from ingest.dxf.blocks import BlockBook
from ingest.dxf.draw import Drawn
from ingest.dxf.layers import LayerTable
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
)


def report_losses(
    account: Account, loaded: Loaded, drawn: Drawn, book: BlockBook, contradictions: Sequence[str]
) -> tuple[str, ...]:
    """What was lost on the way, one line each, for the ledger."""
    losses = [f"{count} {kind} lost in reading" for kind, count in sorted(account.lost.items())]
    losses += [f"perhaps lost around it: {words}" for words in contradictions[:5]]
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
    return {why: count for why, count in book.all_left().items() if not why.startswith(known)}


@dataclass(slots=True)
class Report:
    """Findings on one drawing, collected in a fixed order."""

    file: str
    found: list[Finding] = field(default_factory=list)

    def see(self, code: str, severity: Severity, text: str, items: Sequence[str] = ()) -> None:
        """Take in one finding."""
        sources = tuple(Source(file=self.file, item=item) for item in items)
        finding = Finding(
            id=f"{code}:{self.file}", code=code, severity=severity, where=self.file, text=text, sources=sources
        )
        self.found.append(finding)

    def see_loading(
        self, account: Account, repeated: Sequence[str], loaded: Loaded, contradictions: Sequence[str]
    ) -> None:
        """How the file was got open, and what the library dropped."""
        if loaded.recovered:
            words = f"read in recovery mode ({loaded.recovered}); compare the counts with the drawing"
            self.see("recovered", "check", words)
        if account.lost:
            lost = ", ".join(f"{count} {kind}" for kind, count in sorted(account.lost.items()))
            self.see("lost-in-reading", "check", f"entities that the file holds were not read: {lost}")
        if repeated:
            words = f"{len(repeated)} handles stand at more than one entity ({', '.join(repeated[:3])})"
            self.see("handle-twice", "check", words, repeated[:3])
        if contradictions:
            count = len(contradictions)
            words = f"{count} entities contradict themselves ({contradictions[0]}): pieces of the file may be lost"
            self.see("entity-contradicts-itself", "check", words)
        paper = account.aside.get("paper space", 0)
        if paper:
            self.see("paper-space", "note", f"{paper} entities on layout sheets (paper space) are not read")

    def see_unread(self, drawn: Drawn, book: BlockBook) -> None:
        """Content that gives no part although it may matter."""
        for start, code, words in _UNREAD:
            counts = {why: n for kind in drawn.aside.values() for why, n in kind.items() if why.startswith(start)}
            inside = sum(n for why, n in book.all_left().items() if why.startswith(start))
            if counts or inside:
                first = [drawn.examples[why] for why in sorted(counts) if why in drawn.examples][:3]
                blocks = f", {inside} more inside blocks" if inside else ""
                self.see(code, "check", f"{sum(counts.values())} {words}{blocks}", first)
        if drawn.xrefs:
            names = ", ".join(sorted(drawn.xrefs)[:6])
            self.see("external-reference-names", "note", f"attached by reference: {names}")

    def see_layers(self, drawn: Drawn, layers: LayerTable) -> None:
        """Layers that are off or frozen, and layers of the brief that do not exist."""
        hidden = sorted({(p.layer, p.tags["layer_state"]) for p in drawn.parts if "layer_state" in p.tags})
        if hidden:
            shown = ", ".join(f"{layer} ({state})" for layer, state in hidden[:6]) + (" ..." if len(hidden) > 6 else "")
            self.see("layer-hidden", "check", f"read although their layers are off or frozen in the drawing: {shown}")
        used = {p.layer for p in drawn.parts} | layers.names
        for wanted in sorted(layers.ignored - {name.casefold() for name in used}):
            near = layers.nearest(wanted, used)
            hint = f'; the nearest is "{near}"' if near else ""
            words = f'the brief leaves out the layer "{wanted}", which the drawing does not have{hint}'
            self.see("layer-unknown", "check", words)
