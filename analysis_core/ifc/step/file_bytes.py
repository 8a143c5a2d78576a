"""The STEP text of a model file: plain, zipped, with a byte-order mark, in any common encoding."""

from __future__ import annotations

import hashlib
import io
import re
import zipfile
import zlib
from dataclasses import dataclass
from pathlib import Path

from analysis_core.errors import IfcReadError
from analysis_core.findings import Finding
from analysis_core.ifc.step.archive import models_in

# A zip of a few kilobytes can unpack to anything; no model is as large as this.
LARGEST_MODEL = 4_000_000_000
_BYTE_ORDER_MARKS = (
    (b"\xef\xbb\xbf", "utf-8"),
    (b"\xff\xfe", "utf-16-le"),
    (b"\xfe\xff", "utf-16-be"),
)
_BLANK = b"\0 \t\r\n"
_RAW_TEXT = re.compile(rb"[\x80-\xff]+")


@dataclass(frozen=True, slots=True)
class FileBytes:
    """``data`` is the text to be parsed, ``fingerprint`` the SHA-256 of the file as it lies there.

    ``as_is`` tells whether the two are the same bytes.
    """

    data: bytes
    fingerprint: str
    as_is: bool
    findings: tuple[Finding, ...] = ()


def read_bytes(path: Path) -> FileBytes:
    """Return the STEP text of a file.  Raises IfcReadError where there is none to be had."""
    stored = _stored_bytes(path)
    fingerprint = hashlib.sha256(stored).hexdigest()
    data = _unzipped(stored, path.name) if stored[:4] == b"PK\x03\x04" else stored
    findings: list[Finding] = []
    data = _without_mark(data, path.name, findings)
    data = _ascii(data, path.name, findings)
    return FileBytes(data, fingerprint, data is stored, tuple(findings))


def _stored_bytes(path: Path) -> bytes:
    name = path.name or str(path)
    try:
        data = path.read_bytes()
    except FileNotFoundError:
        raise IfcReadError(f"'{path}' does not exist; check the path and its spelling.") from None
    except IsADirectoryError:
        raise IfcReadError(f"'{name}' is a folder; name the IFC file in it.") from None
    except PermissionError:
        reason = (
            "is a folder; name the IFC file in it"
            if path.is_dir()
            else ("may not be read by you; ask for permission or copy it to a folder of yours")
        )
        raise IfcReadError(f"'{name}' {reason}.") from None
    except (OSError, ValueError) as error:
        raise IfcReadError(f"'{name}' cannot be read ({error}); check the path.") from None
    if not data[:1000].strip(_BLANK) and not data.strip(_BLANK):
        raise IfcReadError(f"'{name}' is empty: it holds no model. Copy or export it again.")
    return data


def _unzipped(data: bytes, name: str) -> bytes:
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            return archive.read(_model_in(archive, name))
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, ValueError) as error:
        raise IfcReadError(
            f"'{name}' is a damaged zip archive ({error}); copy or export it again."
        ) from None
    except NotImplementedError as error:
        raise IfcReadError(
            f"'{name}' is packed in a way that cannot be read ({error}); unpack it first."
        ) from None
    except RuntimeError:
        raise IfcReadError(
            f"'{name}' is protected by a password; unpack it and name the .ifc file inside."
        ) from None


def _model_in(archive: zipfile.ZipFile, name: str) -> zipfile.ZipInfo:
    files = [info for info in archive.infolist() if not info.is_dir()]
    models = models_in(archive)
    if not models:
        held = ", ".join(f"'{info.filename}'" for info in files[:3]) or "nothing"
        raise IfcReadError(
            f"'{name}' is a zip archive without an .ifc file (it holds {held}); zip a model in "
            f"STEP format."
        )
    if len(models) > 1:
        held = ", ".join(f"'{info.filename}'" for info in models[:3])
        raise IfcReadError(
            f"'{name}' is a zip archive with {len(models)} models ({held}); unpack it and name one."
        )
    if models[0].file_size > LARGEST_MODEL:
        raise IfcReadError(
            f"'{name}' unpacks to {models[0].file_size:,} bytes; at most {LARGEST_MODEL:,} are "
            f"read. Unpack it and split the model."
        )
    return models[0]


def _without_mark(data: bytes, name: str, findings: list[Finding]) -> bytes:
    """Drop a byte-order mark, which the standard does not provide for; decode UTF-16."""
    for mark, encoding in _BYTE_ORDER_MARKS:
        if not data.startswith(mark):
            continue
        body = data[len(mark) :]
        if encoding != "utf-8":
            try:
                body = body.decode(encoding).encode("utf-8")
            except UnicodeDecodeError:
                raise IfcReadError(
                    f"'{name}' begins like {encoding.upper()} text but is not; copy or export it "
                    f"again."
                ) from None
        findings.append(
            Finding(
                "note",
                "byte-order-mark",
                f"'{name}' begins with a byte-order mark ({encoding}), which IFC does not permit; "
                f"it was passed over. Other programs may refuse the file: export it without.",
            )
        )
        return body
    return data


def _ascii(data: bytes, name: str, findings: list[Finding]) -> bytes:
    """Write raw UTF-8 letters the way ISO 10303-21 asks for; the parser would drop them."""
    if data.isascii() or b"\0" in data[:4096]:
        return data
    try:
        data.decode("utf-8")
    except UnicodeDecodeError:
        findings.append(
            Finding(
                "note",
                "text-encoding",
                f"'{name}' holds texts in a character set that it does not name (neither "
                f"ISO 10303-21 nor UTF-8). Names with such letters show wrongly; numbers are not "
                f"affected. Export the model again to mend them.",
            )
        )
        return data
    findings.append(
        Finding(
            "note",
            "text-encoding",
            f"'{name}' holds letters in plain UTF-8, which IFC in STEP format does not permit; "
            f"they were read as such. Other programs may drop them.",
        )
    )
    return _RAW_TEXT.sub(_escaped, data)


def _escaped(match: re.Match[bytes]) -> bytes:
    text = match[0].decode("utf-8")
    if all(ord(letter) <= 0xFFFF for letter in text):
        return b"\\X2\\" + text.encode("utf-16-be").hex().upper().encode() + b"\\X0\\"
    return b"\\X4\\" + text.encode("utf-32-be").hex().upper().encode() + b"\\X0\\"
