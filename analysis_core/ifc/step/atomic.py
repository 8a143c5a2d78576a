"""A file is replaced as a whole or not at all, by one process at a time.

The new content goes to a file beside the target, is flushed to the disk and then renamed over it.
A crash or a full disk leaves the old file; a power cut after the rename leaves the new one.
"""

from __future__ import annotations

import contextlib
import os
import secrets
import stat
import sys
import time
from collections.abc import Callable, Iterable, Iterator
from pathlib import Path

from analysis_core.errors import IfcWriteError

WAIT_SECONDS = 60.0
_MARK = ".spanledger-"
_POLL_SECONDS = 0.02


@contextlib.contextmanager
def writing_to(target: str | Path, *, wait: float = WAIT_SECONDS) -> Iterator[Path]:
    """Hold the right to write ``target``; yield the file that it names, links followed.

    One process at a time writes into a folder; others wait up to ``wait`` seconds.  Raises
    IfcWriteError where the target cannot be written, in one sentence that says why.
    """
    path = _checked(Path(target))
    with _locked(path, wait):
        _clear_leftovers(path)
        yield path


def replace_file(
    path: Path,
    chunks: Iterable[bytes | memoryview],
    *,
    before: Callable[[], None] = lambda: None,
) -> None:
    """Write ``chunks`` as the new content of ``path``; call it while ``writing_to`` it.

    Permissions (and the owner, where we may) stay as they were.  ``before`` is called before the
    old file gives way, and may raise.  Raises IfcWriteError and leaves the old file where anything
    fails.
    """
    temporary = path.with_name(f"{_prefix(path)}{secrets.token_hex(6)}.tmp")
    try:
        try:
            _write(temporary, path, chunks)
            before()
            os.replace(temporary, path)
        except BaseException:
            with contextlib.suppress(OSError):
                os.unlink(temporary)
            raise
        _flush_folder(path.parent)
    except IfcWriteError:
        raise
    except OSError as error:
        raise IfcWriteError(
            f"'{path.name}' could not be written in '{path.parent}' ({_reason(error)}); what was "
            f"there before is unchanged. Make room or choose another place."
        ) from error


def _checked(target: Path) -> Path:
    try:
        path = Path(os.path.realpath(target))
        folder = path.parent
        if not folder.is_dir():
            raise IfcWriteError(
                f"The folder '{folder}' does not exist, so '{path.name}' cannot be written there. "
                f"Create it or choose another."
            )
        if path.is_dir():
            raise IfcWriteError(f"'{path}' is a folder; name a file to write to.")
        if path.exists() and not path.is_file():
            raise IfcWriteError(f"'{path}' is not an ordinary file; name a file to write to.")
        # The superuser may write anywhere; a file marked read-only is still meant to stay.
        if path.exists() and not (path.stat().st_mode & 0o222 and os.access(path, os.W_OK)):
            raise IfcWriteError(
                f"'{path.name}' is read-only. Make it writable or write to another file."
            )
        if not os.access(folder, os.W_OK | os.X_OK):
            raise IfcWriteError(
                f"'{path.name}' cannot be written: the folder '{folder}' is read-only for you. "
                f"Choose another."
            )
    except IfcWriteError:
        raise
    except (OSError, ValueError) as error:
        raise IfcWriteError(
            f"'{target}' cannot be written ({_reason(error)}); choose another file."
        ) from error
    return path


def _write(temporary: Path, path: Path, chunks: Iterable[bytes | memoryview]) -> None:
    try:
        before = path.stat()
    except FileNotFoundError:
        before = None
    # 0o666 as any program creates files; the user's mask narrows it.
    descriptor = os.open(
        temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), 0o666
    )
    with os.fdopen(descriptor, "wb", buffering=0) as file:
        for chunk in chunks:
            view = memoryview(chunk)
            while view:
                view = view[file.write(view) :]
        if before is not None:
            _keep_attributes(temporary, path, before)
        os.fsync(file.fileno())


def _keep_attributes(temporary: Path, path: Path, before: os.stat_result) -> None:
    with contextlib.suppress(OSError):  # only the superuser may give files away
        if hasattr(os, "chown"):
            os.chown(temporary, before.st_uid, before.st_gid)
    os.chmod(temporary, stat.S_IMODE(before.st_mode))
    if hasattr(os, "listxattr"):
        with contextlib.suppress(OSError):
            for name in os.listxattr(path):
                os.setxattr(temporary, name, os.getxattr(path, name))


def _flush_folder(folder: Path) -> None:
    """Make the rename last; not every system lets a folder be flushed."""
    with contextlib.suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)


def _prefix(path: Path) -> str:
    # Names may be up to 255 bytes long; the end of a long one is cut for the temporary file.
    return f".{path.name.encode()[:180].decode(errors='ignore')}{_MARK}"


def _clear_leftovers(path: Path) -> None:
    """Remove temporary files of processes that were killed; we hold the lock, so none is alive."""
    prefix = _prefix(path)
    with contextlib.suppress(OSError):
        for entry in os.scandir(path.parent):
            if entry.name.startswith(prefix) and entry.name.endswith(".tmp"):
                with contextlib.suppress(OSError):
                    os.unlink(entry.path)


@contextlib.contextmanager
def _locked(path: Path, wait: float) -> Iterator[None]:
    descriptor, remove = _lock_descriptor(path)
    try:
        deadline = time.monotonic() + wait
        while not _try_lock(descriptor):
            if time.monotonic() > deadline:
                raise IfcWriteError(
                    f"Another process has been writing in '{path.parent}' for {wait:.0f} seconds; "
                    f"'{path.name}' was not touched. Wait until it has finished and try again."
                )
            time.sleep(_POLL_SECONDS)
        yield
    finally:
        os.close(descriptor)
        if remove is not None:
            with contextlib.suppress(OSError):
                os.unlink(remove)


def _lock_descriptor(path: Path) -> tuple[int, Path | None]:
    """Open what is locked: the folder itself, or a lock file where folders cannot be locked.

    The lock goes with the process, so a killed one leaves none behind.
    """
    try:
        if sys.platform != "win32":
            descriptor = os.open(path.parent, os.O_RDONLY)
            if _can_lock(descriptor):
                return descriptor, None
            os.close(descriptor)
        lock = path.parent / f"{_MARK}lock"
        # Kept on Windows only while in use: an open file cannot be deleted there.
        return os.open(lock, os.O_RDWR | os.O_CREAT, 0o666), (
            lock if sys.platform == "win32" else None
        )
    except OSError as error:
        raise IfcWriteError(
            f"'{path.name}' cannot be written in '{path.parent}' ({_reason(error)}); choose "
            f"another folder."
        ) from error


if sys.platform == "win32":
    import msvcrt

    def _try_lock(descriptor: int) -> bool:
        try:
            msvcrt.locking(descriptor, msvcrt.LK_NBLCK, 1)
        except OSError:
            return False
        return True

    def _can_lock(descriptor: int) -> bool:
        return False

else:
    import errno
    import fcntl

    def _try_lock(descriptor: int) -> bool:
        try:
            fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            return False
        return True

    def _can_lock(descriptor: int) -> bool:
        """Some network folders refuse a lock on a folder."""
        try:
            fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
            fcntl.flock(descriptor, fcntl.LOCK_UN)
        except OSError as error:
            return error.errno in (errno.EWOULDBLOCK, errno.EAGAIN)
        return True


def _reason(error: BaseException) -> str:
    text = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
    return text[:1].lower() + text[1:]
