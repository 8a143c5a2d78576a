"""GlobalIds that follow from what they stand for, so that posting twice gives the same ones.

A GlobalId is a UUID written with 22 characters of a base-64 alphabet of its own: two bits in the
first character, six in each of the others (IFC documentation, IfcGloballyUniqueId).
"""

from __future__ import annotations

import base64
import hashlib
import uuid
from collections.abc import Iterable

NAMESPACE = uuid.UUID("5b0a6b1e-6d0f-5a55-9d53-2f1d6a1c7e10")
"""Ours alone: a name within it cannot meet a GlobalId that another program made."""

_STANDARD = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
_IFC = b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"
_ALPHABET = bytes.maketrans(_STANDARD, _IFC)


def global_ids(names: Iterable[str]) -> list[str]:
    """Return the GlobalId of each name: a version 5 UUID (RFC 9562, 5.5) in our namespace."""
    space = NAMESPACE.bytes
    blocks = bytearray()
    for name in names:
        digest = bytearray(hashlib.sha1(space + name.encode(errors="replace")).digest()[:16])
        digest[6] = digest[6] & 0x0F | 0x50
        digest[8] = digest[8] & 0x3F | 0x80
        # 128 bits behind four zero bits are 22 sixes; twelve more zeros fill the last bytes.
        blocks += (int.from_bytes(digest, "big") << 12).to_bytes(18, "big")
    text = base64.b64encode(bytes(blocks)).translate(_ALPHABET).decode()
    return [text[i : i + 22] for i in range(0, len(text), 24)]


def global_id(name: str) -> str:
    """Return the GlobalId of one name."""
    return global_ids([name])[0]
