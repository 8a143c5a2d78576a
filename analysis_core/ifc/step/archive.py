"""A zip archive with another model in it, and the way back to the archive as it was.

Programs that zip pack the same text into different bytes, so that packing a model anew does not
give the old archive again.  The way back is therefore kept in the archive itself, between its
last entry and its directory, where readers do not look (they go by the directory, or stop at the
last entry):

    entries before the model            as they were
    the model                           with our results
    other entries                       as they were
    what the old archive had instead    headers and directory, with the digest of the whole
    directory

Where ``zlib`` gives the old packed stream again from the old text, only its settings are kept,
else the stream itself.  The digest proves that what comes back is the old archive.  Layout of an
archive: APPNOTE.TXT 6.3, sections 4.3.7 (local header), 4.3.9 (descriptor), 4.3.12 (directory)
and 4.3.16 (end).
"""

from __future__ import annotations

import hashlib
import io
import json
import struct
import zipfile
import zlib
from collections.abc import Iterator
from dataclasses import dataclass

_LOCAL = struct.Struct("<4s5H3L2H")
_ENTRY = struct.Struct("<4s6H3L5H2L")
_END = struct.Struct("<4s4H2LH")
_SIZES_BEHIND = 0x08
_ENCRYPTED = 0x01
_LONG_SIZES = 0x0001
"""Kind of the extra field that holds sizes of 64 bits."""
_LARGEST = 0xFFFFFFFE
_MOST_ENTRIES = 0xFFFE
_CHUNK = 1 << 20
_MARK = b"Spanledger: the archive before posting\n"
_LENGTHS = struct.Struct("<2Q")

Packing = tuple[int, int]
"""Level and memory level of zlib; ``_UNPACKED`` where an entry is stored as it is."""
_UNPACKED: Packing = (0, 0)
_USUAL: Packing = (6, 8)
_PACKINGS = tuple((level, memory) for memory in (8, 9) for level in (6, 9, 5, 1, 2, 3, 4, 7, 8))


@dataclass(frozen=True, slots=True)
class _Place:
    """Where the model of an archive lies: its local header, its data, its descriptor (if any).

    ``directory`` is where the directory begins.
    """

    info: zipfile.ZipInfo
    header: int
    data: int
    end: int
    behind: int
    directory: int


@dataclass(frozen=True, slots=True)
class _Way:
    """What the old archive had where the new one differs.

    ``stream`` is kept where ``packing`` is None, empty otherwise.
    """

    digest: str
    packing: Packing | None
    head: bytes
    behind: bytes
    directory: bytes
    stream: bytes


def models_in(archive: zipfile.ZipFile) -> list[zipfile.ZipInfo]:
    """Return the entries that are models in STEP format.

    Not the shadow files "._name" that one operating system puts beside each file it zips.
    """
    return [
        info
        for info in archive.infolist()
        if info.filename.lower().endswith(".ifc")
        and not info.is_dir()
        and not info.filename.rpartition("/")[2].startswith("._")
    ]


def with_model(stored: bytes, content: bytes, *, way_back: bool) -> bytes:
    """Return an archive whose model has another content.

    Names, dates, comments and all other entries stay.  ``way_back``: with what ``before`` needs;
    where the archive has that already, it stays.
    """
    place = _place(stored)
    if place is None:
        return _packed_anew(stored, content)
    known = _way_in(stored, place)
    way, start = known or (None, place.directory)
    if way_back and way is None:
        way = _way_from(stored, place)
    packing = _UNPACKED if place.info.compress_type == zipfile.ZIP_STORED else _USUAL
    if way is not None and way.packing is not None:
        packing = way.packing
    stream = b"".join(_stream(content, packing))
    head = _head(stored[place.header : place.data], content, stream, packing)
    others = stored[place.behind : start]
    front = stored[: place.header] + head + stream + others
    kept = _recorded(way) if way_back and way is not None else b""
    shift = len(head) + len(stream) - (place.behind - place.header)
    result = (
        front + kept
        + _directory(stored, place, content, stream, packing, shift, len(front) + len(kept))
    )  # fmt: skip
    return result if _reads_as(result, content) else _packed_anew(stored, content)


def before(stored: bytes, content: bytes) -> bytes | None:
    """Return the archive as it was before ``with_model``, when its model was ``content``.

    None where no way back was kept, or where it no longer leads there.
    """
    place = _place(stored)
    known = _way_in(stored, place) if place is not None else None
    if place is None or known is None:
        return None
    way, start = known
    stream = way.stream
    if way.packing is not None:
        stream = b"".join(_stream(content, way.packing))
    others = stored[place.behind : start]
    result = stored[: place.header] + way.head + stream + way.behind + others + way.directory
    return result if hashlib.sha256(result).hexdigest() == way.digest else None


# -- the way back ----------------------------------------------------------------------------


def _way_from(stored: bytes, place: _Place) -> _Way:
    packed = stored[place.data : place.end]
    packing = _packing_of(packed, place.info.compress_type)
    return _Way(
        hashlib.sha256(stored).hexdigest(),
        packing,
        stored[place.header : place.data],
        stored[place.end : place.behind],
        stored[place.directory :],
        packed if packing is None else b"",
    )


def _recorded(way: _Way) -> bytes:
    parts = (way.head, way.behind, way.directory)
    facts = {"digest": way.digest, "packing": way.packing, "lengths": [len(p) for p in parts]}
    packed = zlib.compress(b"".join([json.dumps(facts).encode(), b"\n", *parts]), 9)
    lengths = _LENGTHS.pack(len(packed), len(way.stream))
    return b"".join([_MARK, packed, way.stream, lengths, _MARK])


def _way_in(stored: bytes, place: _Place) -> tuple[_Way, int] | None:
    """Return the way back that an archive holds before its directory, and where that begins."""
    end = place.directory - len(_MARK)
    if end < _LENGTHS.size or stored[end : place.directory] != _MARK:
        return None
    packed, stream = _LENGTHS.unpack(stored[end - _LENGTHS.size : end])
    start = end - _LENGTHS.size - stream - packed - len(_MARK)
    if start < place.behind or stored[start : start + len(_MARK)] != _MARK:
        return None
    at = start + len(_MARK)
    try:
        first, _, rest = zlib.decompress(stored[at : at + packed]).partition(b"\n")
        facts = json.loads(first)
        head, behind, directory = facts["lengths"]
        packing = None if facts["packing"] is None else (*map(int, facts["packing"]),)
        return _Way(
            str(facts["digest"]),
            (packing[0], packing[1]) if packing else None,
            rest[:head],
            rest[head : head + behind],
            rest[head + behind : head + behind + directory],
            stored[at + packed : at + packed + stream],
        ), start
    except (zlib.error, ValueError, KeyError, TypeError, IndexError):
        return None  # not as we write it


def _packing_of(packed: bytes, method: int) -> Packing | None:
    """Return how zlib makes this stream of the text that is in it; None where it does not."""
    if method == zipfile.ZIP_STORED:
        return _UNPACKED
    if method != zipfile.ZIP_DEFLATED:
        return None
    text = zlib.decompress(packed, -zlib.MAX_WBITS)
    return next((each for each in _PACKINGS if _gives(text, each, packed)), None)


def _gives(text: bytes, packing: Packing, packed: bytes) -> bool:
    """Whether a text is packed into these bytes; most wrong packings differ soon."""
    at = 0
    for piece in _stream(text, packing):
        if packed[at : at + len(piece)] != piece:
            return False
        at += len(piece)
    return at == len(packed)


def _stream(content: bytes, packing: Packing) -> Iterator[bytes]:
    if packing == _UNPACKED:
        yield content
        return
    level, memory = packing
    packer = zlib.compressobj(level, zlib.DEFLATED, -zlib.MAX_WBITS, memory)
    view = memoryview(content)
    for start in range(0, len(view), _CHUNK):
        yield packer.compress(view[start : start + _CHUNK])
    yield packer.flush()


# -- the layout of an archive ----------------------------------------------------------------


def _place(stored: bytes) -> _Place | None:
    """Return where the model lies; None for archives that are not laid out plainly.

    Such are archives in several volumes, behind a program that unpacks them, or with sizes of
    64 bits.
    """
    with zipfile.ZipFile(io.BytesIO(stored)) as archive:
        infos, directory = archive.infolist(), archive.start_dir
        (info,) = models_in(archive)
    end_at = len(stored) - _END.size - len(archive.comment)
    if end_at < directory or stored[end_at : end_at + 4] != b"PK\x05\x06":
        return None
    _, disk, first, here, count, size, offset, _ = _END.unpack_from(stored, end_at)
    plain = disk == first == 0 and here == count == len(infos) <= _MOST_ENTRIES
    if not plain or offset != directory or offset + size != end_at:
        return None
    if any(i.header_offset > _LARGEST or i.flag_bits & _ENCRYPTED for i in infos):
        return None
    header = info.header_offset
    sign, _, flags, _, _, _, _, _, _, name, extra = _LOCAL.unpack_from(stored, header)
    data = header + _LOCAL.size + name + extra
    end = data + info.compress_size
    behind = _descriptor_end(stored, end, info) if flags & _SIZES_BEHIND else end
    inside = any(header < i.header_offset < (behind or end) for i in infos)
    if sign != b"PK\x03\x04" or behind is None or inside or behind > directory:
        return None
    return _Place(info, header, data, end, behind, directory)


def _descriptor_end(stored: bytes, end: int, info: zipfile.ZipInfo) -> int | None:
    for sign in (b"PK\x07\x08", b""):
        for sizes in ("<L2L", "<L2Q"):
            values = sign + struct.pack(sizes, info.CRC, info.compress_size, info.file_size)
            if stored.startswith(values, end):
                return end + len(values)
    return None


def _head(head: bytes, content: bytes, stream: bytes, packing: Packing) -> bytes:
    """Return a local header with the sizes of the new content in it."""
    sign, version, flags, _, time, date, _, _, _, length, _ = _LOCAL.unpack_from(head)
    name = head[_LOCAL.size : _LOCAL.size + length]
    extra = _without_long_sizes(head[_LOCAL.size + length :])
    method = zipfile.ZIP_STORED if packing == _UNPACKED else zipfile.ZIP_DEFLATED
    return _LOCAL.pack(
        sign, version, flags & ~_SIZES_BEHIND, method, time, date,
        zlib.crc32(content), len(stream), len(content), length, len(extra),
    ) + name + extra  # fmt: skip


def _without_long_sizes(extra: bytes) -> bytes:
    kept, at = b"", 0
    while at + 4 <= len(extra):
        kind, size = struct.unpack_from("<2H", extra, at)
        if kind != _LONG_SIZES:
            kept += extra[at : at + 4 + size]
        at += 4 + size
    return kept + extra[at:]


def _directory(
    stored: bytes,
    place: _Place,
    content: bytes,
    stream: bytes,
    packing: Packing,
    shift: int,
    start: int,
) -> bytes:
    """Return the directory of the new archive, which begins at ``start``.

    What lay behind the model lies ``shift`` bytes further on.
    """
    method = zipfile.ZIP_STORED if packing == _UNPACKED else zipfile.ZIP_DEFLATED
    parts, at = [], place.directory
    while stored[at : at + 4] == b"PK\x01\x02":
        fields = list(_ENTRY.unpack_from(stored, at))
        after = at + _ENTRY.size + fields[10] + fields[11] + fields[12]
        if fields[16] == place.header:
            fields[3] &= ~_SIZES_BEHIND
            fields[4] = method
            fields[7:10] = zlib.crc32(content), len(stream), len(content)
        elif fields[16] > place.header:
            fields[16] += shift
        parts += [_ENTRY.pack(*fields), stored[at + _ENTRY.size : after]]
        at = after
    end = list(_END.unpack_from(stored, at))
    end[6] = start
    return b"".join([*parts, _END.pack(*end), stored[at + _END.size :]])


def _reads_as(stored: bytes, content: bytes) -> bool:
    with zipfile.ZipFile(io.BytesIO(stored)) as archive:
        (info,) = models_in(archive)
        return archive.read(info) == content


def _packed_anew(stored: bytes, content: bytes) -> bytes:
    """Return the archive written entry by entry, as the packing library does it."""
    result = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(stored)) as old, zipfile.ZipFile(result, "w") as new:
        new.comment = old.comment
        (model,) = models_in(old)
        for info in old.infolist():
            text = content if info.header_offset == model.header_offset else old.read(info)
            new.writestr(info, text, compress_type=info.compress_type)
    return result.getvalue()
