"""The target is the old file or the new one at every moment, whatever happens meanwhile."""

import json
import os
import resource
import stat
import subprocess
import sys
import threading
from pathlib import Path

import ifcopenshell
import ifcopenshell.util.element as element_tools
import pytest
from posting_makers import BEAM, SECOND_BEAM, outcome_of, small_model, span_result

from analysis_core.errors import IfcReadError, IfcWriteError
from analysis_core.ifc.posting import writer
from analysis_core.ifc.posting.posting import Posting
from analysis_core.ifc.step import atomic

HERE = Path(__file__).parent
OUTCOME = outcome_of(span_result(BEAM))


@pytest.fixture
def model(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model())
    return path


def python(*arguments, **options):
    environment = {**os.environ, "PYTHONPATH": f"{HERE}:{HERE.parents[1]}"}
    return subprocess.Popen(
        [sys.executable, *map(str, arguments)], env=environment, text=True,
        stdout=subprocess.PIPE, stderr=subprocess.PIPE, **options,
    )  # fmt: skip


def test_killed_at_two_hundred_random_moments_it_leaves_the_old_file_or_the_new(tmp_path):
    run = python(HERE / "kill_driver.py", tmp_path, 200, 20310504)
    out, err = run.communicate(timeout=280)

    assert run.returncode == 0, err
    counts = json.loads(out)
    # Both must have happened, else the kills came too early or too late to prove anything.
    assert counts["old"] >= 20
    assert counts["new"] >= 20
    # What killed processes left behind is cleared away by the next one.
    assert counts["left"] == ["model.ifc"]


POST_ONE = """
import sys
from posting_makers import *
from analysis_core.ifc.posting import writer
elements = (BEAM, SECOND_BEAM, COLUMN_A, COLUMN_B)
lines = [span_result(e, mark=f"B-{i}", load=1e3 * (i + 1)) for i, e in enumerate(elements)]
print("ready", flush=True)
sys.stdin.readline()
for _ in range(10):
    writer.post(sys.argv[1], sys.argv[1], outcome_of(*lines), only=[f"B-{sys.argv[2]}"])
"""


def test_processes_that_post_at_once_do_not_lose_each_other_s_results(model):
    original = model.read_bytes()
    runs = [python("-c", POST_ONE, model, i, stdin=subprocess.PIPE) for i in range(4)]
    for run in runs:
        assert run.stdout.readline() == "ready\n"
    for run in runs:
        run.stdin.write("go\n")
        run.stdin.flush()
    for run in runs:
        _, err = run.communicate(timeout=120)
        assert run.returncode == 0, err

    file = ifcopenshell.open(str(model))
    found = [s for s in file.by_type("IfcPropertySet") if s.Name == "Spanledger_Effects"]
    marks = sorted(p.NominalValue.wrappedValue for s in found for p in s.HasProperties
                   if p.Name == "LineMark")  # fmt: skip
    assert marks == ["B-0", "B-1", "B-2", "B-3"]
    writer.remove(model, model)
    assert model.read_bytes() == original


def test_whoever_waits_too_long_is_told_so(model):
    began, ended = threading.Event(), threading.Event()

    def hold():
        with atomic.writing_to(model):
            began.set()
            ended.wait(10)

    thread = threading.Thread(target=hold)
    thread.start()
    began.wait(10)
    with (
        pytest.raises(IfcWriteError, match=r"Another process has been writing .* try again"),
        atomic.writing_to(model, wait=0.1),
    ):
        pass
    ended.set()
    thread.join()


def test_a_full_disk_leaves_the_old_file_and_nothing_else(model):
    before = model.read_bytes()
    soft, hard = resource.getrlimit(resource.RLIMIT_FSIZE)
    resource.setrlimit(resource.RLIMIT_FSIZE, (len(before) + 100, hard))
    try:
        with pytest.raises(IfcWriteError, match=r"could not be written .* is unchanged"):
            writer.post(model, model, OUTCOME)
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, (soft, hard))

    assert model.read_bytes() == before
    assert os.listdir(model.parent) == ["model.ifc"]


@pytest.mark.parametrize("moment", ["write", "fsync", "replace"])
def test_any_failure_of_the_system_is_one_sentence(model, monkeypatch, moment):
    def fail(*_, **__):
        raise OSError(5, "Input/output error")

    before = model.read_bytes()
    target = {"write": (atomic, "_write"), "fsync": (os, "fsync"), "replace": (os, "replace")}
    monkeypatch.setattr(*target[moment], fail)
    with pytest.raises(IfcWriteError, match=r"^'model.ifc' could not be written .*\.$") as caught:
        writer.post(model, model, OUTCOME)
    monkeypatch.undo()

    assert "\n" not in str(caught.value)
    assert model.read_bytes() == before
    assert os.listdir(model.parent) == ["model.ifc"]


def test_the_content_is_on_the_disk_before_the_name_is(model, monkeypatch):
    calls = []
    flush, replace = os.fsync, os.replace
    monkeypatch.setattr(os, "fsync", lambda fd: (calls.append("flush"), flush(fd))[1])
    monkeypatch.setattr(os, "replace", lambda a, b: (calls.append("rename"), replace(a, b))[1])
    writer.post(model, model, OUTCOME)

    assert calls == ["flush", "rename", "flush"]  # the file, its name, the folder


def test_permissions_stay(model):
    model.chmod(0o640)
    writer.post(model, model, OUTCOME)

    assert stat.S_IMODE(model.stat().st_mode) == 0o640


def test_a_new_file_gets_the_permissions_of_any_new_file(model, tmp_path):
    mask = os.umask(0o027)
    try:
        writer.post(model, tmp_path / "out.ifc", OUTCOME)
    finally:
        os.umask(mask)

    assert stat.S_IMODE((tmp_path / "out.ifc").stat().st_mode) == 0o640


def test_a_link_stays_a_link(model, tmp_path):
    link = tmp_path / "elsewhere" / "link.ifc"
    link.parent.mkdir()
    link.symlink_to(model)
    writer.post(link, link, OUTCOME)

    assert link.is_symlink()
    assert b"Spanledger_Effects" in model.read_bytes()
    assert os.listdir(link.parent) == ["link.ifc"]


def test_a_read_only_target_is_left_alone(model, tmp_path):
    target = tmp_path / "issued.ifc"
    target.write_bytes(b"issued")
    target.chmod(0o444)
    with pytest.raises(IfcWriteError, match=r"'issued.ifc' is read-only\. Make it writable"):
        writer.post(model, target, OUTCOME)

    assert target.read_bytes() == b"issued"


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser may write anywhere")
def test_a_read_only_folder_is_named(model, tmp_path):
    folder = tmp_path / "archive"
    folder.mkdir(mode=0o555)
    with pytest.raises(IfcWriteError, match=r"folder .* is read-only for you"):
        writer.post(model, folder / "out.ifc", OUTCOME)


def test_a_folder_that_is_not_there_is_named(model, tmp_path):
    with pytest.raises(IfcWriteError, match=r"folder '.*gone' does not exist"):
        writer.post(model, tmp_path / "gone" / "out.ifc", OUTCOME)


def test_a_folder_as_target_is_refused(model, tmp_path):
    with pytest.raises(IfcWriteError, match="is a folder; name a file"):
        writer.post(model, tmp_path, OUTCOME)


def test_a_model_that_is_not_there_is_named(tmp_path):
    with pytest.raises(IfcReadError, match=r"gone.ifc' cannot be read .*; check the path"):
        writer.post(tmp_path / "gone.ifc", tmp_path / "out.ifc", OUTCOME)

    assert not (tmp_path / "out.ifc").exists()


def test_a_model_changed_by_another_program_meanwhile_is_not_overwritten(model, monkeypatch):
    theirs = small_model(name="changed meanwhile")
    parts = Posting.parts

    def slowly(self):
        yield from parts(self)
        model.write_bytes(theirs)

    monkeypatch.setattr(Posting, "parts", slowly)
    with pytest.raises(IfcWriteError, match=r"was changed by another program .* Run again"):
        writer.post(model, model, OUTCOME)

    assert model.read_bytes() == theirs
    assert os.listdir(model.parent) == ["model.ifc"]


def test_whoever_watches_may_stop_it_and_nothing_is_left(model):
    class Stopped(Exception):  # noqa: N818 -- as a user interface would call it
        pass

    def watch(_, done):
        if done > 0.3:
            raise Stopped

    before = model.read_bytes()
    with pytest.raises(Stopped):
        writer.post(model, model, OUTCOME, progress=watch)

    assert model.read_bytes() == before
    assert os.listdir(model.parent) == ["model.ifc"]


def test_a_long_name_is_no_obstacle(model, tmp_path):
    target = tmp_path / f"{'ü' * 120}x.ifc"
    writer.post(model, target, OUTCOME)
    writer.post(target, target, OUTCOME)

    file = ifcopenshell.open(str(target))
    assert element_tools.get_psets(file.by_guid(BEAM))
    assert not element_tools.get_psets(file.by_guid(SECOND_BEAM))
