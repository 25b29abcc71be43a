"""The folder a check writes: whole or not at all, and never over anything that is not a check of this program."""

from __future__ import annotations

import json
import tempfile
from pathlib import Path

from intrados.compare import record
from intrados.compare.check import Checked
from intrados.compare.sheet import stations_csv

RESULTS = "results.json"


class FolderError(OSError):
    """A folder that cannot be written, or must not be replaced."""


def default_folder(argument: str) -> Path:
    """``JOB-check`` beside the job file; for ``demo:NAME`` in the current folder."""
    if argument.startswith("demo:"):
        return Path(f"{argument.removeprefix('demo:')}-check")
    path = Path(argument)
    return path.with_name(f"{path.stem}-check")


def require_usable(folder: Path) -> None:
    """Raises FolderError, before anything is solved, where ``write_folder`` could not write.

    An existing folder may be replaced only if it is empty or holds a results.json of this program.
    """
    try:
        if folder.exists() and not folder.is_dir():
            raise FolderError(f"--out {folder}: is a file; give a folder")
        if folder.is_dir() and folder.samefile(Path.cwd()):
            raise FolderError(f"--out {folder}: is the current folder, which cannot be replaced; give another folder")
        if folder.is_dir() and any(folder.iterdir()) and not _is_ours(folder):
            raise FolderError(
                f"--out {folder}: exists and holds no {RESULTS} of this program, so it is not replaced; "
                "give another folder"
            )
        with tempfile.TemporaryDirectory(dir=_foothold(folder), prefix=".intrados-"):
            pass
    except FolderError:
        raise
    except OSError as error:
        raise FolderError(f"--out {folder}: cannot be written ({error.strerror})") from error


def write_folder(folder: Path, checked: Checked, figures: bool) -> None:
    """Write all files of a check beside ``folder`` first and put them in its place when complete.

    Raises FolderError; on any error or interruption nothing is left behind and an earlier folder stays as it was.
    """
    from intrados.fem.vtu import write_fields

    results = checked.results
    try:
        with tempfile.TemporaryDirectory(dir=_foothold(folder), prefix=".intrados-") as scratch:
            made = Path(scratch) / "new"
            made.mkdir()
            _write_text(made / RESULTS, record.to_json(results))
            _write_text(made / "stations.csv", stations_csv(results))
            write_fields(made / "fields.vtu", checked.solved, tuple(case.name for case in results.cases))
            if figures:
                from intrados.compare.draw import save_all

                save_all(results, made)
            _put(made, folder, Path(scratch) / "old")
    except OSError as error:
        raise FolderError(f"--out {folder}: cannot be written ({error.strerror})") from error


def _put(made: Path, folder: Path, old: Path) -> None:
    """Put what was made in the place of the folder, or leave the folder as it is."""
    folder.absolute().parent.mkdir(parents=True, exist_ok=True)
    try:
        if folder.exists():
            folder.rename(old)
        made.rename(folder)
    except BaseException:
        if old.exists() and not folder.exists():
            old.rename(folder)
        raise


def _foothold(folder: Path) -> Path:
    """The nearest folder above that exists: nothing is made in it before the results are whole."""
    return next(above for above in folder.absolute().parents if above.exists())


def _is_ours(folder: Path) -> bool:
    try:
        program = json.loads((folder / RESULTS).read_text(encoding="utf-8"))["program"]["name"]
    except (OSError, ValueError, LookupError, TypeError):
        return False
    return bool(program == record.PROGRAM)


def _write_text(path: Path, text: str) -> None:
    # The same bytes on every system.
    path.write_text(text, encoding="utf-8", newline="\n")
