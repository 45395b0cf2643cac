"""Write the published schemas anew: `python -m export.schema.make`, from the top of the checkout."""

from __future__ import annotations

import hashlib
import json
import sys
from pathlib import Path

from export.canonical import canonical_text
from export.schema import SCHEMAS, make_schema, published

FOLDER = Path(__file__).parent


def write_schemas(replace: bool = False) -> None:
    """Write both schemas and note their hashes.

    Args:
        replace: Put a new hash in the place of the old one of that version; right only before it went out.

    Raises:
        SystemExit: When a schema changed and its version did not.
    """
    noted = published()
    for name in SCHEMAS:
        text = make_schema(name)
        version = json.loads(text)["properties"]["schema"]["const"]
        digest = hashlib.sha256(text.encode()).hexdigest()
        if noted.get(version, digest) != digest and not replace:
            raise SystemExit(f"{version} went out with other content: step its version in export/section_json.py")
        noted[version] = digest
        (FOLDER / f"{name}.json").write_text(text, encoding="utf-8")
    (FOLDER / "published.json").write_text(canonical_text(dict(sorted(noted.items()))), encoding="utf-8")


if __name__ == "__main__":
    write_schemas(replace="--not-yet-published" in sys.argv)
