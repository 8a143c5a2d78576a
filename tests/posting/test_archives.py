"""ifcZIP: what comes back after posting is the archive that went in, whoever packed it.

Archives are made here in every way that programs make them: other levels, sizes behind the data,
without packing, another packing method, a streaming writer, entries before and behind the model.
"""

import io
import shutil
import struct
import subprocess
import zipfile
import zlib

import ifcopenshell
import ifcopenshell.util.element as element_tools
import pytest
from posting_makers import BEAM, COLUMN_A, outcome_of, small_model, span_result

from analysis_core.errors import IfcReadError
from analysis_core.ifc.posting import writer
from analysis_core.ifc.step import archive

OUTCOME = outcome_of(span_result(BEAM, supports=(COLUMN_A,)))
TEXT = small_model() + b"\n" * 10 + b"/*" + bytes(range(32, 120)).replace(b"*", b"") * 900 + b"*/"


class Unseekable(io.RawIOBase):
    """Where a program can only write on, the sizes follow the data."""

    def __init__(self) -> None:
        self.data = b""

    def writable(self) -> bool:
        return True

    def write(self, piece) -> int:
        self.data += bytes(piece)
        return len(piece)


def zipped(method=zipfile.ZIP_DEFLATED, level=6, *, streamed=False, others=True, long=False):
    target = Unseekable() if streamed else io.BytesIO()
    with zipfile.ZipFile(target, "w", method, compresslevel=level) as made:
        if others:
            made.writestr("before.txt", "first " * 50)
        info = zipfile.ZipInfo("inner/model.ifc", (2029, 3, 4, 5, 6, 8))
        info.compress_type = method
        info.external_attr = 0o640 << 16
        info.comment = b"the model"
        with made.open(info, "w", force_zip64=long) as entry:
            entry.write(TEXT)
        if others:
            made.writestr("__MACOSX/inner/._model.ifc", b"\0\5\x16\7 no model")
            made.writestr("behind.png", bytes(range(256)) * 20)
            made.comment = b"a remark"
    return target.data if streamed else target.getvalue()


def foreign():
    """Packed by a program with a packer of its own: blocks end elsewhere than zlib ends them."""
    packer = zlib.compressobj(6, zlib.DEFLATED, -15)
    half = len(TEXT) // 2
    stream = packer.compress(TEXT[:half]) + packer.flush(zlib.Z_FULL_FLUSH)
    stream += packer.compress(TEXT[half:]) + packer.flush()
    name, crc = b"model.ifc", zlib.crc32(TEXT)
    sizes = struct.pack("<3L", crc, len(stream), len(TEXT))
    local = b"PK\3\4" + struct.pack("<5H", 20, 0, 8, 0, 33) + sizes + struct.pack("<2H", 9, 0)
    entry = b"PK\1\2" + struct.pack("<6H", 20, 20, 0, 8, 0, 33) + sizes
    entry += struct.pack("<5H2L", 9, 0, 0, 0, 0, 0, 0) + name
    start = len(local) + len(name) + len(stream)
    end = b"PK\5\6" + struct.pack("<4H2LH", 0, 0, 1, 1, len(entry), start, 0)
    return local + name + stream + entry + end


ARCHIVES = {
    "usual": zipped(),
    "fast": zipped(level=1),
    "thorough": zipped(level=9),
    "not packed": zipped(zipfile.ZIP_STORED, None),
    "bzip2": zipped(zipfile.ZIP_BZIP2, 9),
    "lzma": zipped(zipfile.ZIP_LZMA, None),
    "sizes behind the data": zipped(streamed=True),
    "sizes of 64 bits in the local header": zipped(long=True),
    "nothing but the model": zipped(others=False),
    "a packer of its own": foreign(),
    "a remark cut short": zipped()[:-1],
}  # fmt: skip


def model_of(data):
    with zipfile.ZipFile(io.BytesIO(data)) as opened:
        assert opened.testzip() is None
        (info,) = archive.models_in(opened)
        return opened.read(info)


@pytest.mark.parametrize("kind", ARCHIVES)
def test_taking_the_results_out_gives_the_same_archive_again(tmp_path, kind):
    source, posted, back = (tmp_path / f"{n}.ifczip" for n in ("source", "posted", "back"))
    data = ARCHIVES[kind]
    source.write_bytes(data)
    writer.post(source, posted, OUTCOME)
    once = posted.read_bytes()
    assert writer.post(posted, posted, OUTCOME).written == 0
    assert abs(len(posted.read_bytes()) - len(once)) < 20  # the time packs a little differently
    report = writer.remove(posted, back)

    assert back.read_bytes() == data
    assert (report.path, report.packed_anew) == ("append", False)


@pytest.mark.parametrize("kind", ARCHIVES)
def test_a_posted_archive_reads_everywhere_and_keeps_what_else_is_in_it(tmp_path, kind):
    source, posted = tmp_path / "source.ifczip", tmp_path / "posted.ifczip"
    source.write_bytes(ARCHIVES[kind])
    writer.post(source, posted, OUTCOME)

    assert b"Spanledger_Effects" in model_of(posted.read_bytes())
    with zipfile.ZipFile(source) as old, zipfile.ZipFile(posted) as new:
        assert new.testzip() is None
        assert new.comment == old.comment
        for was, now in zip(old.infolist(), new.infolist(), strict=True):
            assert (was.filename, was.date_time, was.external_attr, was.comment) == (
                now.filename, now.date_time, now.external_attr, now.comment
            )  # fmt: skip
            if was.filename != "inner/model.ifc" and was.filename != "model.ifc":
                assert old.read(was) == new.read(now)
    if unzip := shutil.which("unzip"):
        done = subprocess.run([unzip, "-tq", posted], capture_output=True, text=True)
        assert done.returncode in (0, 81), done.stdout + done.stderr  # 81: a method it lacks


def test_the_general_library_opens_a_posted_archive(tmp_path):
    source, posted = tmp_path / "source.ifczip", tmp_path / "posted.ifczip"
    source.write_bytes(zipped(others=False))
    writer.post(source, posted, OUTCOME)

    file = ifcopenshell.open(str(posted))
    assert "Spanledger_Effects" in element_tools.get_psets(file.by_guid(BEAM))


def test_only_settings_are_kept_where_they_give_the_stream_again(tmp_path):
    plain, odd = zipped(others=False), foreign()
    grown = [len(archive.with_model(d, TEXT + b"\n", way_back=True)) - len(d) for d in (plain, odd)]

    assert grown[0] < 1000
    assert grown[1] > 1000  # the stream itself had to be kept


def test_an_archive_packed_anew_by_another_program_is_told(tmp_path):
    source, posted, other, back = (tmp_path / f"{n}.ifczip" for n in ("a", "b", "c", "d"))
    source.write_bytes(zipped())
    writer.post(source, posted, OUTCOME)
    with zipfile.ZipFile(posted) as old, zipfile.ZipFile(other, "w") as new:
        for info in old.infolist():
            new.writestr(info.filename, old.read(info))
    report = writer.remove(other, back)

    assert report.packed_anew
    assert model_of(back.read_bytes()) == TEXT


def test_a_way_back_that_leads_elsewhere_is_not_taken(tmp_path):
    source, posted, back = (tmp_path / f"{n}.ifczip" for n in ("a", "b", "c"))
    source.write_bytes(zipped())
    writer.post(source, posted, OUTCOME)
    data = bytearray(posted.read_bytes())
    data[10] ^= 1  # another time in the local header of the first entry
    posted.write_bytes(bytes(data))
    report = writer.remove(posted, back)

    assert report.packed_anew


def test_an_entry_added_by_another_program_stays(tmp_path):
    source, posted, back = (tmp_path / f"{n}.ifczip" for n in ("a", "b", "c"))
    source.write_bytes(zipped())
    writer.post(source, posted, OUTCOME)
    with zipfile.ZipFile(posted, "a") as added:
        added.writestr("photo.jpg", "added later")
    writer.post(posted, posted, OUTCOME)
    report = writer.remove(posted, back)

    assert report.packed_anew
    assert model_of(back.read_bytes()) == TEXT
    with zipfile.ZipFile(back) as found:
        assert found.read("photo.jpg") == b"added later"
        assert found.read("before.txt").startswith(b"first")


@pytest.mark.parametrize("cut", [9, 30, 400])
def test_a_damaged_archive_is_refused_in_a_sentence(tmp_path, cut):
    source = tmp_path / "broken.ifczip"
    source.write_bytes(zipped()[:-cut])
    with pytest.raises(IfcReadError, match="damaged"):
        writer.post(source, tmp_path / "out.ifczip", OUTCOME)

    assert not (tmp_path / "out.ifczip").exists()
