"""GlobalIds that follow from what they stand for, so that posting twice gives the same ones.

A GlobalId is a UUID written with 22 characters of a base-64 alphabet of its own: two bits in the
first character, six in each of the others (IFC documentation, IfcGloballyUniqueId).
"""

from __future__ import annotations

import base64
import hashlib
import uuid
from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

Digests = NDArray[np.uint8]

NAMESPACE = uuid.UUID("5b0a6b1e-6d0f-5a55-9d53-2f1d6a1c7e10")
"""Ours alone: a name within it cannot meet a GlobalId that another program made."""

_STANDARD = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
_IFC = b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"
_ALPHABET = bytes.maketrans(_STANDARD, _IFC)


def global_ids(names: Iterable[str]) -> list[str]:
    """Return the GlobalId of each name: a version 5 UUID (RFC 9562, 5.5) in our namespace."""
    return _written(_digests(names))


def global_id(name: str) -> str:
    """Return the GlobalId of one name."""
    return global_ids([name])[0]


def derived_ids(names: Iterable[str], purposes: Iterable[str]) -> dict[str, list[str]]:
    """Return, for each purpose, the GlobalIds of many names: their digests, bit by bit added."""
    digests = _digests(names)
    return {purpose: _written(digests ^ _digests([purpose])) for purpose in purposes}


def _digests(names: Iterable[str]) -> Digests:
    space, sha1 = NAMESPACE.bytes, hashlib.sha1
    joined = b"".join([sha1(space + name.encode(errors="replace")).digest()[:16] for name in names])
    return np.frombuffer(joined, dtype=np.uint8).reshape(-1, 16)


def _written(digests: Digests) -> list[str]:
    """Return the GlobalIds of digests, made into UUIDs."""
    # 128 bits behind four zero bits are 22 sixes; the rest fills 24 of them.
    padded = np.zeros((len(digests), 18), dtype=np.uint8)
    uuids = digests.copy()
    uuids[:, 6] = uuids[:, 6] & 0x0F | 0x50
    uuids[:, 8] = uuids[:, 8] & 0x3F | 0x80
    padded[:, :16] = uuids >> np.uint8(4)
    padded[:, 1:17] |= uuids << np.uint8(4)
    text = base64.b64encode(padded.tobytes()).translate(_ALPHABET).decode()
    return [text[i : i + 22] for i in range(0, len(text), 24)]
