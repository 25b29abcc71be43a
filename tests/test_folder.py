"""The result folder: written whole or not at all, and never over anything that is not a check of this program."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from bracket import changed, read

from intrados.compare.check import Checked, check
from intrados.compare.folder import FolderError, default_folder, require_usable, write_folder

OURS = '{"program": {"name": "intrados"}}'


@pytest.fixture(scope="module")
def checked() -> Checked:
    """A coarse check, to have something to write."""
    quick = changed(
        ('  { arc = 50.0, sweep = 90.0, section = "plate" },\n', ""),
        ('  { straight = 150.0, section = ["plate", "bar"] },\n', ""),
        ("piece = 3, distance", "piece = 1, distance"),
        ("piece = 2, angle", "piece = 1, distance"),
        ("[stations]", "[agreement]\nnumerical = 0.1\n[stations]"),
    )
    return check(read(quick))


def files(folder: Path) -> dict[str, bytes]:
    return {str(path.relative_to(folder)): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


@pytest.mark.parametrize(
    ("argument", "folder"),
    [
        ("hook.toml", "hook-check"),
        ("jobs/my hook.v2.toml", "jobs/my hook.v2-check"),
        ("jobs/Öse", "jobs/Öse-check"),
        ("demo:clamp-frame", "clamp-frame-check"),
    ],
)
def test_the_default_folder_lies_beside_the_job_and_here_for_a_demo(argument: str, folder: str) -> None:
    assert default_folder(argument) == Path(folder)


def test_a_new_folder_an_empty_one_and_one_of_ours_may_be_written(tmp_path: Path) -> None:
    require_usable(tmp_path / "new")
    (tmp_path / "empty").mkdir()
    require_usable(tmp_path / "empty")
    (tmp_path / "ours").mkdir()
    (tmp_path / "ours" / "results.json").write_text(OURS, encoding="utf-8")
    (tmp_path / "ours" / "notes.txt").write_text("", encoding="utf-8")
    require_usable(tmp_path / "ours")
    assert sorted(path.name for path in tmp_path.iterdir()) == ["empty", "ours"]


def test_asking_makes_no_folder_above(tmp_path: Path) -> None:
    require_usable(tmp_path / "a" / "b" / "c")
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    "content",
    [
        "",
        "{}",
        "[]",
        "7",
        '{"program": 3}',
        '{"program": {"name": "other"}}',
        '{"program": {"name": ["intrados"]}}',
        "{",
    ],
)
def test_what_is_not_ours_is_not_replaced(tmp_path: Path, content: str) -> None:
    (tmp_path / "results.json").write_text(content, encoding="utf-8")
    with pytest.raises(FolderError, match="not replaced") as caught:
        require_usable(tmp_path)
    assert str(caught.value).startswith(f"--out {tmp_path}: ")
    assert files(tmp_path) == {"results.json": content.encode()}


def test_a_results_file_that_is_no_text_is_not_ours(tmp_path: Path) -> None:
    (tmp_path / "results.json").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(FolderError, match="not replaced"):
        require_usable(tmp_path)


def test_a_file_is_no_folder_nor_can_one_lie_in_it(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("kept", encoding="utf-8")
    with pytest.raises(FolderError, match="is a file"):
        require_usable(tmp_path / "file")
    with pytest.raises(FolderError, match="cannot be written"):
        require_usable(tmp_path / "file" / "below")
    assert files(tmp_path) == {"file": b"kept"}


def test_the_current_folder_is_not_replaced(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    for folder in (Path(), tmp_path):
        with pytest.raises(FolderError, match="current folder"):
            require_usable(folder)


@pytest.mark.parametrize("what", ["iterdir", "exists", "samefile"])
def test_a_folder_that_cannot_be_looked_into_is_one_error(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, what: str
) -> None:
    def forbidden(*_: object) -> Any:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, what, forbidden)
    with pytest.raises(FolderError, match=r"cannot be written \(Permission denied\)"):
        require_usable(tmp_path)


def test_a_folder_that_cannot_be_made_is_one_error(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(*_: object, **__: object) -> Any:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("tempfile.mkdtemp", full)
    with pytest.raises(FolderError, match=r"--out .*out: cannot be written \(No space left on device\)"):
        require_usable(tmp_path / "out")


def test_a_check_is_written_whole_and_replaces_what_was_there(tmp_path: Path, checked: Checked) -> None:
    out = tmp_path / "deep" / "out"
    write_folder(out, checked, figures=False)
    assert sorted(files(out)) == ["fields.vtu", "results.json", "stations.csv"]
    assert json.loads((out / "results.json").read_text(encoding="utf-8"))["program"]["name"] == "intrados"
    first = files(out)
    (out / "old.txt").write_text("", encoding="utf-8")
    require_usable(out)
    write_folder(out, checked, figures=False)
    assert files(out) == first
    assert [path.name for path in (tmp_path / "deep").iterdir()] == ["out"]


@pytest.mark.parametrize(
    "error", [OSError(28, "No space left on device"), KeyboardInterrupt()], ids=["full", "stopped"]
)
@pytest.mark.parametrize("step", ["intrados.fem.vtu.write_fields", "intrados.compare.draw.save_all"])
def test_nothing_is_left_of_a_folder_that_could_not_be_written(
    tmp_path: Path, checked: Checked, monkeypatch: pytest.MonkeyPatch, step: str, error: BaseException
) -> None:
    out = tmp_path / "above" / "out"

    def fail(*_: object) -> None:
        raise error

    monkeypatch.setattr(step, fail)
    with pytest.raises((FolderError, KeyboardInterrupt)):
        write_folder(out, checked, figures=True)
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("error", [PermissionError(13, "in use"), KeyboardInterrupt()], ids=["in use", "stopped"])
def test_the_old_folder_stands_if_the_new_one_cannot_take_its_place(
    tmp_path: Path, checked: Checked, monkeypatch: pytest.MonkeyPatch, error: BaseException
) -> None:
    out = tmp_path / "out"
    out.mkdir()
    (out / "results.json").write_text(OURS, encoding="utf-8")
    rename = Path.rename

    def busy(self: Path, target: Path) -> Path:
        if self.name == "new":
            raise error
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", busy)
    with pytest.raises((FolderError, KeyboardInterrupt)):
        write_folder(out, checked, figures=False)
    assert files(tmp_path) == {str(Path("out") / "results.json"): OURS.encode()}
