"""The command line: ``intrados check``, ``hand`` and ``demo``."""

from __future__ import annotations

import argparse
import io
import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager, nullcontext
from pathlib import Path
from typing import TYPE_CHECKING, TextIO

from intrados.compare.demo import demo_names, demo_text, demo_title
from intrados.compare.job import Job, parse_job, read_job
from intrados.compare.mistake import JobMistakes

if TYPE_CHECKING:
    from intrados.compare.results import Results

RAN, NOT_HELD, WRONG, NOT_REACHED, STOPPED = 0, 1, 2, 3, 130
_DEMO = "demo:"


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command; returns the exit status (0 ran, 1 does not hold, 2 wrong input, 3 numerical target not met)."""
    for stream in (sys.stdout, sys.stderr):
        # A title or a path may hold a character that the terminal cannot show.
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")
    options = _parser().parse_args(arguments)
    try:
        status: int = options.run(options)
    except JobMistakes as mistakes:
        print("\n".join(mistakes.lines), file=sys.stderr)
        return WRONG
    except KeyboardInterrupt:
        print("intrados: stopped; nothing was written", file=sys.stderr)
        return STOPPED
    return status


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="intrados", description="Cross-check a curved-beam hand calculation against finite elements."
    )
    parser.add_argument("--version", action=_Version)
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    check = commands.add_parser("check", help="hand theory, FE, comparison and figures of a job")
    check.add_argument("job", metavar="JOB", help="a job file, or demo:NAME")
    check.add_argument("--out", metavar="DIR", type=Path, help="folder for the results (default JOB-check)")
    check.add_argument("--json", action="store_true", help="print results.json and nothing else")
    check.add_argument("--no-figures", action="store_true", help="write no figures")
    check.add_argument(
        "--must-hold", action="store_true", help="exit 1 unless the theory holds at the governing station"
    )
    check.set_defaults(run=_check)
    hand = commands.add_parser("hand", help="hand theory only, printed; no mesh")
    hand.add_argument("job", metavar="JOB", help="a job file, or demo:NAME")
    hand.add_argument(
        "--ladder", action="store_true", help="also what thickness and section alone cost, without a mesh of the member"
    )
    hand.set_defaults(run=_hand)
    demo = commands.add_parser("demo", help="list the demo jobs, or write one to the current folder")
    demo.add_argument("name", metavar="NAME", nargs="?", help="the demo to write")
    demo.set_defaults(run=_demo)
    return parser


class _Version(argparse.Action):
    """Prints the version; it is looked up only when asked for."""

    def __init__(self, option_strings: Sequence[str], dest: str) -> None:
        super().__init__(option_strings, dest, nargs=0, help="print the version")

    def __call__(
        self,
        parser: argparse.ArgumentParser,
        namespace: argparse.Namespace,
        values: object,
        option_string: str | None = None,
    ) -> None:
        from importlib.metadata import version

        print(f"intrados {version('intrados')}")
        parser.exit(RAN)


def _read(argument: str) -> Job:
    if argument.startswith(_DEMO):
        return parse_job(demo_text(argument.removeprefix(_DEMO)).encode(), argument)
    return read_job(Path(argument))


def _check(options: argparse.Namespace) -> int:
    from intrados.compare.folder import FolderError, default_folder, require_usable
    from intrados.fem.mesher import MeshError

    job = _read(options.job)
    folder: Path = options.out or default_folder(options.job)
    try:
        require_usable(folder)
        results = _solve_and_write(job, folder, figures=not options.no_figures)
    except (FolderError, MeshError) as error:
        print(f"intrados: {error}", file=sys.stderr)
        return WRONG
    _print_check(results, folder, as_json=options.json)
    if results.missed:
        return NOT_REACHED
    held = all(case.governing is not None and case.governing.verdict == "holds" for case in results.cases)
    return NOT_HELD if options.must_hold and not held else RAN


def _solve_and_write(job: Job, folder: Path, figures: bool) -> Results:
    """The check, with a line of progress for a person at a terminal."""
    from rich.console import Console

    # Silent where standard error is not a terminal.
    console = Console(stderr=True)
    with console.status("meshing and solving") if console.is_terminal else nullcontext() as status:
        from intrados.compare.check import check
        from intrados.compare.folder import write_folder

        checked = check(job)
        if status is not None:
            status.update("drawing and writing")
        write_folder(folder, checked, figures)
    return checked.results


@contextmanager
def _output() -> Iterator[TextIO]:
    """Standard output; that its reader leaves early, as ``head`` does, is no error."""
    try:
        yield sys.stdout
        sys.stdout.flush()
    except BrokenPipeError:
        # What is still buffered must go somewhere when the interpreter ends.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _print_check(results: Results, folder: Path, as_json: bool) -> None:
    from intrados.compare.record import to_json
    from intrados.compare.table import check_table, show

    with _output() as stream:
        if as_json:
            # The bytes of the file, whatever the terminal's encoding.
            if isinstance(stream, io.TextIOWrapper):
                stream.reconfigure(encoding="utf-8", newline="\n")
            stream.write(to_json(results))
        else:
            show(check_table(results), stream)
            print(f"\nWritten to {folder}", file=stream)


def _hand(options: argparse.Namespace) -> int:
    from intrados.compare.hand import hand_rows, ladder_rows
    from intrados.compare.table import hand_table, ladder_table, show

    job = _read(options.job)
    with _output() as stream:
        for index, case in enumerate(job.cases):
            title = f"{job.title}, case {case.name}" if len(job.cases) > 1 else job.title
            if options.ladder:
                show(ladder_table(title, job.units, ladder_rows(job, index), job.agreement.band), stream)
            else:
                show(hand_table(title, job.units, hand_rows(job, index)), stream)
    return RAN


def _demo(options: argparse.Namespace) -> int:
    if options.name is None:
        with _output() as stream:
            for name in demo_names():
                print(f"{name:16} {demo_title(name)}", file=stream)
        return RAN
    text = demo_text(options.name)
    path = Path(f"{options.name}.toml")
    try:
        with path.open("x", encoding="utf-8", newline="\n") as file:
            file.write(text)
    except FileExistsError:
        print(f"intrados: {path} exists and is not replaced", file=sys.stderr)
        return WRONG
    except OSError as error:
        print(f"intrados: {path} cannot be written ({error.strerror})", file=sys.stderr)
        return WRONG
    print(f"Written to {path}")
    return RAN
