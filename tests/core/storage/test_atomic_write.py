"""Files written whole or not at all."""

import os
import stat
from pathlib import Path

import pytest

from core.errors import ExistingFileError, FileError
from core.storage import atomic
from core.storage.atomic import write_all_atomically, write_atomically

OLD, NEW = b"old copper", b"new copper"


@pytest.fixture
def path(tmp_path):
    return tmp_path / "sheet.svg"


def only(folder):
    """Names in a folder, to see that nothing is left over."""
    return sorted(item.name for item in folder.iterdir())


def failing(error):
    def call(*arguments, **options):
        raise error

    return call


@pytest.mark.parametrize("replace", [False, True])
def test_a_new_file_holds_the_data_and_nothing_is_left_beside_it(path, replace):
    write_atomically(path, NEW, replace=replace)
    assert path.read_bytes() == NEW
    assert only(path.parent) == [path.name]


def test_a_new_file_gets_the_permissions_of_any_other_new_file(path):
    other = path.with_name("other")
    other.touch()
    write_atomically(path, NEW, replace=False)
    assert stat.S_IMODE(path.stat().st_mode) == stat.S_IMODE(other.stat().st_mode)


def test_a_replaced_file_keeps_its_permissions(path):
    path.write_bytes(OLD)
    path.chmod(0o640)
    write_atomically(path, NEW, replace=True)
    assert path.read_bytes() == NEW
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_without_leave_an_existing_file_stays(path):
    path.write_bytes(OLD)
    with pytest.raises(ExistingFileError, match=r"sheet\.svg: is there already; accepted: "):
        write_atomically(path, NEW, replace=False)
    assert path.read_bytes() == OLD
    assert only(path.parent) == [path.name]


@pytest.mark.parametrize("links", [True, False])
def test_a_file_that_appears_meanwhile_stays(path, monkeypatch, links):
    stage = atomic._stage

    def staged_while_another_writes(target, data):
        temporary = stage(target, data)
        path.write_bytes(OLD)
        return temporary

    monkeypatch.setattr(atomic, "_stage", staged_while_another_writes)
    if not links:
        monkeypatch.setattr(Path, "hardlink_to", failing(PermissionError()))
    with pytest.raises(ExistingFileError, match="is there already"):
        write_atomically(path, NEW, replace=False)
    assert path.read_bytes() == OLD
    assert only(path.parent) == [path.name]


def test_a_file_system_without_hard_links_will_do(path, monkeypatch):
    monkeypatch.setattr(Path, "hardlink_to", failing(PermissionError()))
    write_atomically(path, NEW, replace=False)
    assert path.read_bytes() == NEW
    assert only(path.parent) == [path.name]


def test_without_hard_links_a_failure_leaves_no_empty_file(path, monkeypatch):
    monkeypatch.setattr(Path, "hardlink_to", failing(PermissionError()))
    monkeypatch.setattr(Path, "replace", failing(OSError(5, "Input/output error")))
    with pytest.raises(FileError, match="Input/output error"):
        write_atomically(path, NEW, replace=False)
    assert only(path.parent) == []


@pytest.mark.parametrize("replace", [False, True])
def test_a_full_disk_leaves_everything_as_it_was(path, monkeypatch, replace):
    if replace:
        path.write_bytes(OLD)
    before = only(path.parent)
    monkeypatch.setattr(os, "fsync", failing(OSError(28, "No space left on device")))
    with pytest.raises(FileError, match=r"cannot be written \(No space left on device\)"):
        write_atomically(path, NEW, replace=replace)
    assert only(path.parent) == before
    assert not replace or path.read_bytes() == OLD


def test_an_interrupt_leaves_nothing_behind(path, monkeypatch):
    monkeypatch.setattr(os, "fsync", failing(KeyboardInterrupt()))
    with pytest.raises(KeyboardInterrupt):
        write_atomically(path, NEW, replace=False)
    assert only(path.parent) == []


def test_data_reach_the_disk_before_the_name_does(path, monkeypatch):
    steps = []
    fsync, replace = os.fsync, Path.replace

    def noted_fsync(handle):
        steps.append("folder" if stat.S_ISDIR(os.fstat(handle).st_mode) else "data")
        fsync(handle)

    def noted_replace(self, target):
        steps.append("name")
        return replace(self, target)

    monkeypatch.setattr(os, "fsync", noted_fsync)
    monkeypatch.setattr(Path, "replace", noted_replace)
    write_atomically(path, NEW, replace=True)
    assert steps == ["data", "name", "folder"]


def test_a_folder_is_refused(tmp_path):
    with pytest.raises(FileError, match="is a folder; accepted: "):
        write_atomically(tmp_path, NEW, replace=True)


def test_a_device_is_never_replaced():
    with pytest.raises(FileError, match="is a device or pipe; accepted: "):
        write_atomically(Path(os.devnull), NEW, replace=True)
    assert not Path(os.devnull).is_file()


def test_a_missing_folder_is_told(tmp_path):
    with pytest.raises(FileError, match=r"cannot be written \(No such file or directory\)"):
        write_atomically(tmp_path / "none" / "a.svg", NEW, replace=False)


def test_a_name_too_long_is_told(tmp_path):
    with pytest.raises(FileError, match="cannot be written"):
        write_atomically(tmp_path / ("n" * 300), NEW, replace=False)


def test_a_name_as_long_as_the_system_takes_is_written(tmp_path):
    path = tmp_path / ("n" * 255)
    write_atomically(path, NEW, replace=False)
    assert path.read_bytes() == NEW


def test_a_link_stays_a_link_and_its_goal_is_written(path):
    goal = path.with_name("goal.svg")
    goal.write_bytes(OLD)
    path.symlink_to(goal.name)
    write_atomically(path, NEW, replace=True)
    assert path.is_symlink()
    assert goal.read_bytes() == NEW


def test_a_link_to_an_existing_file_needs_leave_too(path):
    goal = path.with_name("goal.svg")
    goal.write_bytes(OLD)
    path.symlink_to(goal.name)
    with pytest.raises(ExistingFileError):
        write_atomically(path, NEW, replace=False)
    assert goal.read_bytes() == OLD


def test_a_link_in_a_circle_is_told(path):
    path.symlink_to(path.name)
    with pytest.raises(FileError, match="cannot be written"):
        write_atomically(path, NEW, replace=True)


def test_a_write_protected_file_stays(path, monkeypatch):
    path.write_bytes(OLD)
    # The superuser may write anything, so that the answer is given for them.
    monkeypatch.setattr(os, "access", lambda *_: False)
    with pytest.raises(FileError, match="is write-protected; accepted: "):
        write_atomically(path, NEW, replace=True)
    assert path.read_bytes() == OLD


def test_of_several_files_none_is_placed_when_one_is_there(tmp_path):
    one, two = tmp_path / "one", tmp_path / "two"
    two.write_bytes(OLD)
    with pytest.raises(ExistingFileError, match="two: is there already"):
        write_all_atomically({one: NEW, two: NEW}, replace=False)
    assert only(tmp_path) == ["two"]
    assert two.read_bytes() == OLD


def test_of_several_files_all_are_placed(tmp_path):
    files = {tmp_path / "one": NEW, tmp_path / "two": OLD}
    write_all_atomically(files, replace=False)
    assert {path: path.read_bytes() for path in tmp_path.iterdir()} == files


def test_new_files_are_taken_back_when_a_later_one_fails(tmp_path, monkeypatch):
    one, two = tmp_path / "one", tmp_path / "two"
    place = atomic._place

    def full_after_one(temporary, target, replace):
        if target.name == "two":
            raise OSError(28, "No space left on device")
        place(temporary, target, replace)

    monkeypatch.setattr(atomic, "_place", full_after_one)
    with pytest.raises(FileError, match="two: cannot be written"):
        write_all_atomically({one: NEW, two: NEW}, replace=False)
    assert only(tmp_path) == []
