"""The STEP text inside a model file, and how to put a changed one back in the same wrapping.

A model may be zipped, or written in UTF-16.  Posting works on the text; what wraps it is kept.
"""

from __future__ import annotations

import hashlib
import io
import zipfile
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

from analysis_core.errors import IfcReadError
from analysis_core.ifc.step import archive

_UTF16 = ((b"\xff\xfe", "utf-16-le"), (b"\xfe\xff", "utf-16-be"))


@dataclass(frozen=True, slots=True)
class Container:
    """``text`` is the STEP text, ``stored`` the file as it lies on the disk."""

    text: bytes
    stored: bytes
    zipped: bool = False
    encoding: str = ""
    """"utf-16-le" or "utf-16-be" where the text is kept in that."""

    @property
    def fingerprint(self) -> str:
        """SHA-256 of the file as it lies on the disk, in hexadecimal."""
        return hashlib.sha256(self.stored).hexdigest()

    def packed(
        self, parts: Iterable[bytes | memoryview], *, way_back: bool = False
    ) -> Iterable[bytes | memoryview]:
        """Return the file with another text, given in parts, in the same wrapping.

        ``way_back``: so that ``restored`` can give back an archive as it is now.
        """
        if not self.zipped and not self.encoding:
            return parts
        text = b"".join(parts)
        if text == self.text:
            return [self.stored]
        content = self._encoded(text)
        if not self.zipped:
            return [content]
        return [archive.with_model(self.stored, content, way_back=way_back)]

    def restored(self, text: bytes) -> tuple[bytes, bool]:
        """Return the file with the text that it had before, and whether all of it is as it was.

        Not so where an archive has been packed anew by another program, or by another release of
        the packing library: then the text alone is as it was.
        """
        content = self._encoded(text)
        if not self.zipped:
            return content, True
        old = archive.before(self.stored, content)
        if old is not None:
            return old, True
        if text == self.text:
            return self.stored, True
        return archive.with_model(self.stored, content, way_back=False), False

    def _encoded(self, text: bytes) -> bytes:
        if not self.encoding:
            return text
        mark = next(mark for mark, encoding in _UTF16 if encoding == self.encoding)
        return mark + text.decode("utf-8").encode(self.encoding)


def read_container(path: Path) -> Container:
    """Read a model file.  Raises IfcReadError where it cannot be read."""
    try:
        stored = path.read_bytes()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise IfcReadError(f"'{path}' cannot be read ({reason.lower()}); check the path.") from None
    zipped = stored[:4] == b"PK\x03\x04"
    text = _unzipped(stored, path.name) if zipped else stored
    for mark, encoding in _UTF16:
        if text.startswith(mark):
            try:
                return Container(
                    text[2:].decode(encoding).encode("utf-8"), stored, zipped, encoding
                )
            except UnicodeDecodeError:
                raise IfcReadError(
                    f"'{path.name}' begins like {encoding.upper()} text but is not; copy or "
                    f"export it again."
                ) from None
    return Container(text, stored, zipped)


def _unzipped(stored: bytes, name: str) -> bytes:
    try:
        with zipfile.ZipFile(io.BytesIO(stored)) as opened:
            models = archive.models_in(opened)
            if len(models) == 1:
                return opened.read(models[0])
    except Exception as error:  # a damaged archive raises whatever the damage leads to
        raise IfcReadError(
            f"'{name}' is a damaged or protected zip archive ({error}); copy or export it again."
        ) from None
    raise IfcReadError(
        f"'{name}' is a zip archive with {len(models)} .ifc files; one is needed. Unpack it."
    )
