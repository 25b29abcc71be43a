"""The command line: exit statuses, what goes where, and that a folder is written whole or not at all."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import meshio
import numpy as np
import pytest

from intrados.compare import cli
from intrados.compare.demo import demo_names, demo_text

COMMAND = Path(sys.executable).with_name("intrados.exe" if os.name == "nt" else "intrados")


def job(tmp_path: Path, name: str = "short-bracket", *changes: tuple[str, str]) -> Path:
    text = demo_text(name)
    for old, new in changes:
        assert old in text
        text = text.replace(old, new)
    path = tmp_path / "a job.toml"
    path.write_text(text, encoding="utf-8")
    return path


def run(*arguments: str | Path) -> int:
    return cli.main([str(argument) for argument in arguments])


def test_check_writes_its_folder_beside_the_job(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert run("check", job(tmp_path), "--no-figures") == 0
    shown = capsys.readouterr()
    folder = tmp_path / "a job-check"
    assert {path.name for path in folder.iterdir()} == {"results.json", "stations.csv", "fields.vtu"}
    assert "Conclusion" in shown.out
    assert shown.err == ""
    assert "\x1b" not in shown.out
    assert max(len(line) for line in shown.out.splitlines()) <= 100


def test_json_is_the_file_and_nothing_else(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert run("check", job(tmp_path), "--no-figures", "--json", "--out", tmp_path / "out") == 0
    shown = capsys.readouterr().out
    assert shown == (tmp_path / "out" / "results.json").read_text(encoding="utf-8")
    assert json.loads(shown)["schema"] == 1


def test_the_same_job_gives_the_same_bytes(tmp_path: Path) -> None:
    path = job(tmp_path)
    written = []
    for out in ("one", "two"):
        run("check", path, "--no-figures", "--out", tmp_path / out)
        written.append((tmp_path / out / "results.json").read_bytes())
    assert written[0] == written[1]


def test_must_hold_is_about_the_governing_station(tmp_path: Path) -> None:
    out = ["--no-figures", "--out", str(tmp_path / "out")]
    assert run("check", job(tmp_path), "--must-hold", *out) == 1
    assert run("check", job(tmp_path, "press-frame"), "--must-hold", *out) == 0


def test_a_target_that_is_missed_says_where_and_exits_3(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    strict = ("[stations]", "[agreement]\nnumerical = 1e-6\nband = 0.05\n[stations]")
    path = job(tmp_path, "short-bracket", strict)
    # 3 comes before 1.
    assert run("check", path, "--must-hold", "--no-figures", "--out", tmp_path / "out") == 3
    missed = json.loads((tmp_path / "out" / "results.json").read_text(encoding="utf-8"))["missed"]
    assert missed
    assert f"NOT met at: {missed[0]}" in capsys.readouterr().out


@pytest.mark.parametrize("command", ["check", "hand"])
def test_mistakes_go_to_standard_error_and_exit_2(
    command: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = job(tmp_path, "short-bracket", ("nu = 0.3", "nu = 0.7"), ("depth = 80.0", "depth = -80.0"))
    assert run(command, path) == 2
    shown = capsys.readouterr()
    assert shown.out == ""
    assert len(shown.err.splitlines()) == 2
    assert not (tmp_path / "a job-check").exists()


def test_a_folder_of_somebody_else_is_not_replaced(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    theirs = tmp_path / "theirs"
    theirs.mkdir()
    (theirs / "results.json").write_text('{"program": {"name": "other"}}', encoding="utf-8")
    assert run("check", job(tmp_path), "--no-figures", "--out", theirs) == 2
    assert "not replaced" in capsys.readouterr().err
    assert (theirs / "results.json").read_text(encoding="utf-8") == '{"program": {"name": "other"}}'
    file = tmp_path / "file"
    file.write_text("", encoding="utf-8")
    assert run("check", job(tmp_path), "--out", file) == 2
    assert run("check", job(tmp_path), "--out", file / "below") == 2
    assert capsys.readouterr().err.count("\n") == 2


def test_a_folder_of_ours_is_replaced_whole(tmp_path: Path) -> None:
    out = tmp_path / "out"
    run("check", job(tmp_path), "--no-figures", "--out", out)
    (out / "old.txt").write_text("", encoding="utf-8")
    run("check", job(tmp_path), "--no-figures", "--out", out)
    assert not (out / "old.txt").exists()
    assert (out / "results.json").exists()


def test_an_error_while_writing_leaves_the_old_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    out = tmp_path / "out"
    path = job(tmp_path)
    run("check", path, "--no-figures", "--out", out)
    before = (out / "results.json").read_bytes()

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("intrados.fem.vtu.write_fields", full)
    assert run("check", path, "--no-figures", "--out", out) == 2
    assert (out / "results.json").read_bytes() == before
    assert {entry.name for entry in tmp_path.iterdir()} == {"out", "a job.toml"}


def test_an_interrupt_leaves_nothing(tmp_path: Path) -> None:
    path = job(tmp_path, "recovery-hook")
    process = subprocess.Popen([COMMAND, "check", str(path)], stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    time.sleep(0.9)
    process.send_signal(signal.SIGINT)
    _, said = process.communicate(timeout=60)
    left = {entry.name for entry in tmp_path.iterdir()}
    if process.returncode == 0:
        # It was faster than the signal.
        assert left == {"a job.toml", "a job-check"}
    else:
        assert left == {"a job.toml"}
        assert "Traceback" not in said


def test_missing_system_libraries_give_one_line(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    class Broken:
        def find_spec(self, name: str, *_: object) -> None:
            if name == "gmsh":
                raise OSError("libGLU.so.1: cannot open shared object file")

    monkeypatch.delitem(sys.modules, "gmsh", raising=False)
    monkeypatch.setattr(sys, "meta_path", [Broken(), *sys.meta_path])
    assert run("check", job(tmp_path)) == 2
    said = capsys.readouterr().err
    assert "libglu1-mesa" in said
    assert said.count("\n") == 1


def test_hand_needs_no_mesh_and_no_plots() -> None:
    code = (
        "import sys; from intrados.compare.cli import main; main(['hand', 'demo:recovery-hook']);"
        "heavy = {'scipy', 'gmsh', 'skfem', 'matplotlib', 'meshio'} & set(sys.modules);"
        "sys.exit(str(heavy) if heavy else 0)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert "throat" in done.stdout
    assert "\x1b" not in done.stdout


def test_hand_with_the_ladder_says_what_thickness_and_section_cost(capsys: pytest.CaptureFixture[str]) -> None:
    assert run("hand", "demo:davit-arm", "--ladder") == 0
    shown = capsys.readouterr().out
    assert "beyond the band" in shown
    assert "over the web" in shown


def test_demo_lists_and_writes_but_never_overwrites(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    assert run("demo") == 0
    assert all(name in capsys.readouterr().out for name in demo_names()[:1])
    assert run("demo", "clamp-frame") == 0
    assert (tmp_path / "clamp-frame.toml").read_text(encoding="utf-8") == demo_text("clamp-frame")
    assert run("demo", "clamp-frame") == 2
    assert run("demo", "clamp-fram") == 2
    assert 'did you mean "clamp-frame"?' in capsys.readouterr().err


def test_the_field_file_holds_thickness_displacement_and_stress(tmp_path: Path) -> None:
    out = tmp_path / "out"
    run("check", "demo:recovery-hook", "--no-figures", "--out", out)
    mesh = meshio.read(out / "fields.vtu")
    assert {"thickness", "displacement (haul)", "stress xx (haul)", "stress xy (snatch)"} <= set(mesh.point_data)
    thickness = mesh.point_data["thickness"]
    assert thickness.max() == pytest.approx(40.0)
    assert thickness.min() == pytest.approx(16.0)
    ratio = (
        np.abs(mesh.point_data["displacement (snatch)"]).max() / np.abs(mesh.point_data["displacement (haul)"]).max()
    )
    assert ratio == pytest.approx(1.4)


def test_the_command_is_installed_under_its_name() -> None:
    name = "intrados.exe" if os.name == "nt" else "intrados"
    done = subprocess.run(
        [Path(sys.executable).with_name(name), "--version"], capture_output=True, text=True, check=True
    )
    assert done.stdout.startswith("intrados ")
