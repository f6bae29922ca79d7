"""Files written whole or not at all, and never over another one without being told to."""

from __future__ import annotations

import contextlib
import os
import secrets
import stat
from pathlib import Path
from typing import TYPE_CHECKING

from core.errors import ExistingFileError, FileError

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping

_NEW_FILE_MODE = 0o666  # the system takes the user's mask off
_BINARY = getattr(os, "O_BINARY", 0)  # Windows would change line ends


def write_atomically(path: Path, data: bytes, *, replace: bool) -> None:
    """Write one file so that it is there whole or not at all.

    Parameters
    ----------
    path : Path
        A link is followed: what it points to is written, and the link stays.
    data : bytes
    replace : bool
        Whether a file of that name may be replaced; it keeps its permissions.

    Raises
    ------
    ExistingFileError
        If there is a file already and it may not be replaced.
    FileError
        If the file cannot be written. What was there before is untouched.
    """
    write_all_atomically({path: data}, replace=replace)


def write_all_atomically(files: Mapping[Path, bytes], *, replace: bool) -> None:
    """Write several files; none is put in its place before all of them are on the disk.

    Parameters
    ----------
    files : mapping of Path to bytes
        See `write_atomically`.
    replace : bool
        Whether files of these names may be replaced.

    Raises
    ------
    ExistingFileError
        If one of them is there already and may not be replaced.
    FileError
        If one of them cannot be written.
    """
    targets = {path: _checked_target(path, replace) for path in files}
    staged: dict[Path, Path] = {}
    placed: list[Path] = []
    try:
        for path, data in files.items():
            with _named_failure(path):
                staged[path] = _stage(targets[path], data)
        for path, temporary in staged.items():
            with _named_failure(path):
                _place(temporary, targets[path], replace)
            placed.append(targets[path])
    except BaseException:
        # Only new files are taken back; those replaced are whole, and the old ones are gone.
        _remove([] if replace else placed)
        raise
    finally:
        _remove(staged.values())
    for folder in {target.parent for target in placed}:
        _sync_folder(folder)


def _checked_target(path: Path, replace: bool) -> Path:
    """The file that is really meant, refused where it cannot or may not be written."""
    with _named_failure(path):
        target = Path(os.path.realpath(path))
        try:
            mode = target.stat().st_mode
        except FileNotFoundError:
            return target
    if stat.S_ISDIR(mode):
        raise FileError(f"{path}: is a folder; accepted: the name of a file", path=path)
    if not stat.S_ISREG(mode):
        raise FileError(f"{path}: is a device or pipe; accepted: the name of a file", path=path)
    if not replace:
        raise _existing(path)
    if not os.access(target, os.W_OK):
        raise FileError(f"{path}: is write-protected; accepted: a file of your own", path=path)
    return target


def _stage(target: Path, data: bytes) -> Path:
    """Write the data beside the target under a name of its own, down to the disk."""
    # The short name cannot grow past what the folder allows, however long the target's is.
    temporary = target.parent / f".kerfwave-{secrets.token_hex(6)}.part"
    handle = os.open(temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL | _BINARY, _NEW_FILE_MODE)
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
            stream.flush()
            os.fsync(stream.fileno())
        with contextlib.suppress(FileNotFoundError):
            temporary.chmod(stat.S_IMODE(target.stat().st_mode))
    except BaseException:
        _remove([temporary])
        raise
    return temporary


def _place(temporary: Path, target: Path, replace: bool) -> None:
    """Give the finished file its name; without `replace` only if no other has it."""
    if replace:
        temporary.replace(target)
        return
    try:
        target.hardlink_to(temporary)  # one step, which fails where the name is taken
    except FileExistsError:
        raise
    except (OSError, NotImplementedError):
        _place_without_links(temporary, target)


def _place_without_links(temporary: Path, target: Path) -> None:
    """Hold the name by an empty file, on file systems that have no hard links."""
    os.close(os.open(target, os.O_WRONLY | os.O_CREAT | os.O_EXCL, _NEW_FILE_MODE))
    try:
        temporary.replace(target)
    except BaseException:
        _remove([target])
        raise


def _sync_folder(folder: Path) -> None:
    """Make the new names last; not every system can, and the data are safe already."""
    with contextlib.suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _remove(paths: Iterable[Path]) -> None:
    for path in paths:
        with contextlib.suppress(OSError):
            path.unlink()


@contextlib.contextmanager
def _named_failure(path: Path) -> Iterator[None]:
    """Tell a failure of the system in one line that names the file."""
    try:
        yield
    except FileExistsError:
        raise _existing(path) from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise FileError(
            f"{path}: cannot be written ({reason}); accepted: a file in a folder you may write to",
            path=path,
        ) from error


def _existing(path: Path) -> ExistingFileError:
    return ExistingFileError(
        f"{path}: is there already; accepted: a new name, or leave to replace it", path=path
    )
