"""`issues.bcf`: what is missing or doubtful as BCF 3.0 topics, with views onto the sections they bear on.

The records and the XML come from the library bcf-client; the archive is written here, because its own writer puts the
clock into it.
"""

from __future__ import annotations

import zipfile
from collections.abc import Sequence
from math import hypot
from pathlib import Path
from typing import Any

from export import VERSION
from export.bcf_topics import Issue, find_issues
from export.canonical import round_number
from export.model_frame import ModelFrame
from export.report.markup import clean
from export.stamp import Stamp
from ingest.members import Point3
from ingest.model import NOTICE, Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal

AUTHOR = f"cutworthy {VERSION}"
KINDS = ("Question", "Finding", "Assumption")
PRIORITIES = ("stop", "check", "question", "confirm")
STATUS = "Open"
ASPECT = 16.0 / 9.0
MARGIN = 1.1
"""Height of a view over what it shows."""
STAND_OFF = 50.0
"""Distance of the camera from the section, m; an orthogonal view does not depend on it."""
FIXED_TIME = (1980, 1, 1, 0, 0, 0)


def write_bcf(proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site, folder: Path) -> str:
    """Write `issues.bcf`.

    Args:
        proposal: The proposal, world coordinates.
        definitions: Its sections.
        site: The site as received.
        folder: Where to write.

    Returns:
        Name of the file. Coordinates of the views are those of the model received, metres (BCF 3.0); ids follow from
        the hashes of the inputs and the ids of what is asked.
    """
    from bcf.xml_parser import XmlParserSerializer

    book = _Book(ModelFrame.of(site, proposal.frame), Stamp.of(site), site)
    records: dict[str, Any] = book.head(site)
    for number, issue in enumerate(find_issues(proposal, definitions, site)):
        records.update(book.topic(issue, number))
    serialize = XmlParserSerializer().serialize
    _write_archive(folder / "issues.bcf", {name: serialize(record) for name, record in records.items()})
    return "issues.bcf"


def _write_archive(path: Path, texts: dict[str, str]) -> None:
    """Members sorted, folders before their files, all with one time."""
    folders = {name.rpartition("/")[0] + "/" for name in texts if "/" in name}
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        for name in sorted({*texts, *folders}):
            member = zipfile.ZipInfo(name, FIXED_TIME)
            member.create_system = 3
            member.external_attr = (0o40755 << 16 | 0x10) if name.endswith("/") else 0o644 << 16
            member.compress_type = zipfile.ZIP_STORED if name.endswith("/") else zipfile.ZIP_DEFLATED
            archive.writestr(member, texts.get(name, "").encode())


class _Book:
    """The records of one archive."""

    def __init__(self, frame: ModelFrame, stamp: Stamp, site: Site) -> None:
        import bcf.v3.model as records
        from xsdata.models.datatype import XmlDateTime

        self.records, self.frame, self.stamp = records, frame, stamp
        self.when = XmlDateTime(stamp.day.year, stamp.day.month, stamp.day.day, 0, 0, 0, 0, 0)
        self.models = [one.file for one in site.inputs if one.kind == "ifc"]

    def head(self, site: Site) -> dict[str, Any]:
        """The files that stand beside the topics."""
        r = self.records
        return {
            "bcf.version": r.Version(version_id="3.0"),
            "project.bcfp": r.ProjectInfo(
                project=r.Project(name=clean(site.name) or None, project_id=str(self.stamp.guid("project")))
            ),
            "extensions.xml": r.Extensions(
                topic_types=r.ExtensionsTopicTypes(topic_type=list(KINDS)),
                topic_statuses=r.ExtensionsTopicStatuses(topic_status=[STATUS]),
                priorities=r.ExtensionsPriorities(priority=list(PRIORITIES)),
                topic_labels=r.ExtensionsTopicLabels(topic_label=[]),
                users=r.ExtensionsUsers(user=[AUTHOR]),
                snippet_types=r.ExtensionsSnippetTypes(snippet_type=[]),
                stages=r.ExtensionsStages(stage=[]),
            ),
        }

    def topic(self, issue: Issue, number: int) -> dict[str, Any]:
        """The markup and the views of one topic, by the names of their files."""
        r = self.records
        guid = str(self.stamp.guid(issue.kind, issue.id, issue.title))
        views = {f"viewpoint_{one.id}.bcfv": self._view(one, issue, guid) for one in issue.sections}
        listed = [r.ViewPoint(viewpoint=name, index=n, guid=view.guid) for n, (name, view) in enumerate(views.items())]
        topic = r.Topic(
            guid=guid,
            topic_type=issue.kind,
            topic_status=STATUS,
            title=clean(issue.title),
            priority=issue.priority,
            index=number,
            creation_date=self.when,
            creation_author=AUTHOR,
            description=clean(f"{issue.text}\n\nRecord {issue.id}. {NOTICE}"),
            viewpoints=r.TopicViewpoints(view_point=listed) if listed else None,
        )
        files = [r.File(filename=clean(name), is_external=True) for name in self.models]
        header = r.Header(files=r.HeaderFiles(file=files)) if files else None
        found = {f"{guid}/{name}": view for name, view in views.items()}
        return {f"{guid}/markup.bcf": r.Markup(header=header, topic=topic), **found}

    def _view(self, definition: SectionDefinition, issue: Issue, topic: str) -> Any:
        """An orthogonal view square to the section, cut open at it, with the elements asked about selected.

        A clipping plane's direction points into the half that is not shown (BCF 3.0).
        """
        r = self.records
        (ax, ay), (bx, by) = definition.line
        length = hypot(bx - ax, by - ay) or 1.0
        ux, uy = (bx - ax) / length, (by - ay) / length
        (x0, x1), (z0, z1) = definition.extent.x, definition.extent.z
        middle = ((x0 + x1) / 2, (z0 + z1) / 2)
        at = (ax + middle[0] * ux, ay + middle[0] * uy, middle[1])
        ahead = (-uy, ux, 0.0)
        camera = tuple(a - STAND_OFF * way for a, way in zip(at, ahead, strict=True))
        height = MARGIN * max(z1 - z0, (x1 - x0) / ASPECT) / self.frame.place.scale
        selected = [r.Component(ifc_guid=one) for one in issue.global_ids]
        return r.VisualizationInfo(
            guid=str(self.stamp.guid("view", topic, definition.id)),
            components=r.Components(
                selection=r.ComponentSelection(component=selected) if selected else None,
                visibility=r.ComponentVisibility(default_visibility=True),
            ),
            orthogonal_camera=r.OrthogonalCamera(
                camera_view_point=self._point((camera[0], camera[1], camera[2])),
                camera_direction=self._way(ahead),
                camera_up_vector=self._way((0.0, 0.0, 1.0)),
                view_to_world_scale=round_number(height),
                aspect_ratio=round_number(ASPECT),
            ),
            clipping_planes=r.VisualizationInfoClippingPlanes(
                clipping_plane=[r.ClippingPlane(location=self._point(at), direction=self._way((uy, -ux, 0.0)))]
            ),
        )

    def _point(self, world: Point3) -> Any:
        x, y, z = (round(value, 4) + 0.0 for value in self.frame.to_model(world))
        return self.records.Point(x=x, y=y, z=z)

    def _way(self, world: Point3) -> Any:
        x, y, z = (round_number(value) if abs(value) > 1e-12 else 0.0 for value in self.frame.turn(world))
        return self.records.Direction(x=x, y=y, z=z)
