"""Is this a file that can be read, and of which kind? Told by content, before any library touches it."""

from __future__ import annotations

import errno
import os
import re
import stat
import unicodedata
from pathlib import Path
from typing import Literal

from ingest.errors import InputError

Kind = Literal["ifc", "dxf", "ags"]

HEAD = 65536
_PICTURES_AND_OTHERS = (
    (b"\x89PNG", "a PNG picture"),
    (b"\xff\xd8\xff", "a JPEG picture"),
    (b"GIF8", "a GIF picture"),
    (b"II*\x00", "a TIFF picture"),
    (b"MM\x00*", "a TIFF picture"),
    (b"%PDF", "a PDF document"),
    (b"AC10", "a DWG drawing"),
    (b"\x1f\x8b", "a gzip archive"),
    (b"Rar!", "a RAR archive"),
    (b"7z\xbc\xaf", "a 7z archive"),
    (b"\xd0\xcf\x11\xe0", "an office document"),
    (b"{\\rtf", "a formatted text document"),
    (b"\x7fELF", "a program"),
    (b"MZ", "a program"),
)
_UTF16 = (b"\xff\xfe", b"\xfe\xff")
_BINARY_DXF = b"Binary DXF\r\n\x1a\x00"
_DXF_START = re.compile(rb"\s*(?:999[ \t]*\r?\n[^\n]*\n\s*)*0[ \t]*\r?\n\s*SECTION", re.I)
_AGS_START = re.compile(rb'\s*"(?:GROUP"|\*\*)')
_WHAT_TO_DO = {"ifc": "export the model as IFC (.ifc)", "dxf": "save the drawing as DXF", "ags": "export as AGS4"}


def shown(name: str) -> str:
    """A file name safe to print on one line: control and direction marks replaced."""
    safe = "".join("\N{REPLACEMENT CHARACTER}" if unicodedata.category(c)[0] == "C" else c for c in name)
    return safe if len(safe) <= 120 else safe[:117] + "..."


def check_readable(path: Path) -> int:
    """Size of a regular, readable, non-empty file, bytes.

    Raises:
        InputError: Missing, a folder, a loop of links, no permission, not a file, empty.
    """
    name = shown(path.name or str(path))
    try:
        found = path.stat()
    except OSError as error:
        raise _no_access(name, error) from error
    if stat.S_ISDIR(found.st_mode):
        raise InputError(name, "", "is a folder, not a file", "name the file itself")
    if not stat.S_ISREG(found.st_mode):
        raise InputError(name, "", "is a device or pipe, not a file", "copy its content into a file")
    if found.st_mode & 0o444 == 0:  # a privileged user may open it, the native reader crashes on it
        raise InputError(name, "", "may not be read (no read permission)", "give yourself the right to read it")
    if found.st_size == 0:
        raise InputError(name, "", "is empty (0 bytes)", "export or copy the file again")
    return found.st_size


def refuse_device(path: Path) -> None:
    """Refuse what is there but no file and no folder: reading a pipe would never end.

    Raises:
        InputError: A device or pipe.
    """
    if path.exists() and not path.is_dir() and not path.is_file():
        raise InputError(shown(path.name), "", "is a device or pipe, not a file", "copy its content into a file")


def kind_of(path: Path) -> Kind:
    """Tell the kind of a file by its content; the extension only decides what to say.

    Raises:
        InputError: Not readable, or no IFC, DXF or AGS.
    """
    check_readable(path)
    name = shown(path.name)
    try:
        with path.open("rb") as stream:
            head = stream.read(HEAD)
    except OSError as error:
        raise _no_access(name, error) from error
    text = head.removeprefix(b"\xef\xbb\xbf")
    if text.lstrip()[:12] == b"ISO-10303-21" or b"FILE_SCHEMA" in text:
        return "ifc"
    if head[:4] == b"PK\x03\x04":
        return _zipped(path, name)
    if _BINARY_DXF in head[:32] or _DXF_START.match(text):
        return "dxf"
    if _AGS_START.match(text):
        return "ags"
    _refuse_known(path, name, head, text)
    if re.search(rb"\n\s*SECTION\s*\r?\n\s*2\s*\r?\n", text):
        return "dxf"
    if b'"GROUP"' in text:
        return "ags"
    raise InputError(name, "byte 0", f"is no IFC, DXF or AGS4: it begins with {_begin(head)}", _remedy(path))


def _refuse_known(path: Path, name: str, head: bytes, text: bytes) -> None:
    remedy = _remedy(path)
    for magic, what in _PICTURES_AND_OTHERS:
        if head.startswith(magic):
            raise InputError(name, "byte 0", f"is {what}, whatever its name says", remedy)
    if head[:2] in _UTF16 or (len(head) > 64 and head[:64].count(0) >= 24):
        zeros = head[:64].count(0) == 64
        what = "holds only zero bytes" if zeros else "is UTF-16 text, which no reader of this format takes"
        raise InputError(name, "byte 0", what, remedy if zeros else "save it as UTF-8 or plain text")
    if text.lstrip()[:1] == b"<":
        danger = " and declares entities" if re.search(rb"<!\s*(?:ENTITY|DOCTYPE)", text, re.I) else ""
        raise InputError(name, "byte 0", f"is XML{danger}; IFC is read as STEP text only", _WHAT_TO_DO["ifc"])


def _zipped(path: Path, name: str) -> Kind:
    import zipfile

    try:
        with zipfile.ZipFile(path) as packed:
            inside = [member for member in packed.namelist() if member.lower().endswith(".ifc")]
    except (zipfile.BadZipFile, OSError, ValueError, NotImplementedError) as error:
        raise InputError(name, "byte 0", "is a damaged ZIP archive", "pack or export it again") from error
    if not inside:
        raise InputError(name, "byte 0", "is a ZIP archive without an .ifc in it", _remedy(path))
    return "ifc"


def _no_access(name: str, error: OSError) -> InputError:
    words = {
        errno.ENOENT: ("does not exist", "check the spelling and the folder"),
        errno.ENOTDIR: ("does not exist", "check the spelling and the folder"),
        errno.ELOOP: ("is a link that leads back to itself", "name the file itself"),
        errno.EACCES: ("may not be read (no permission)", "give yourself the right to read it"),
        errno.EPERM: ("may not be read (no permission)", "give yourself the right to read it"),
        errno.ENAMETOOLONG: ("has a name that is too long", "rename it"),
    }
    problem, remedy = words.get(
        error.errno or 0, (f"cannot be read: {os.strerror(error.errno or 0)}", "check the file and the disk")
    )
    return InputError(name, "", problem, remedy)


def _remedy(path: Path) -> str:
    kinds = {".ifc": "ifc", ".ifczip": "ifc", ".dxf": "dxf", ".ags": "ags"}
    return _WHAT_TO_DO.get(kinds.get(path.suffix.lower(), ""), "name an IFC, DXF or AGS4 file")


def _begin(head: bytes) -> str:
    words = head[:24].decode("latin-1")
    return '"' + "".join(c if c.isprintable() else "." for c in words) + '"'
