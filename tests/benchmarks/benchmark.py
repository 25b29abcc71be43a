"""What speed is claimed, measured: `python tests/benchmarks/benchmark.py` prints ratios of one run on this machine.

1. Time to a fibre stress right to 0.1 % and to 0.001 %, against plain scikit-fem with second-order triangles.
2. A whole `check` of each demo without figures, against imports, one mesh and one factorisation of its final system.
3. `hand` of each demo, against importing numpy and pydantic: with a first model, and bare, when pydantic loads little.
4. The three-dimensional sections of each demo, each solved once, against the membrane FE of the member.

Ratios, not seconds, are what can be compared; each is of medians taken in turn. One BLAS thread throughout.
"""

from __future__ import annotations

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import json
import logging
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
from plain import solve_plainly

from intrados.compare.demo import demo_names, demo_text
from intrados.compare.job import parse_job
from intrados.compare.ladder import MEMBRANE_SHARE, SECTION_SHARE, solved_section
from intrados.compare.zone import place
from intrados.fem.accuracy import FACES, refine
from intrados.fem.membrane import Elastic
from intrados.theory.load import EndLoad
from intrados.theory.member import Arc, Member
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.shapes import rectangle
from intrados.theory.statics import loading
from intrados.theory.station import Station

BAR, MOMENT, E, NU = RectangleBar(30.0, 70.0, 10.0), 1e5, 206000.0, 0.3
EXACT = BAR.hoop(0.0, MOMENT, np.array([BAR.a, BAR.b]))
# Plain meshes are made finer until one takes longer than this.
PATIENCE = 15.0
RUNS = 7
INTRADOS = [sys.executable, "-c", "from intrados.compare.cli import main; raise SystemExit(main())"]
# What a check cannot do without: its libraries, its job, its final mesh, and that system's factorisation.
LEAST = """
import sys
import gmsh, meshio, numpy, pydantic, rich, scipy.linalg, skfem
from intrados.compare.demo import demo_text
from intrados.compare.job import parse_job
from intrados.fem.membrane import Elastic, discretise
from intrados.fem.mesher import mesh
from intrados.fem.strip import plan
name, fineness, degree = sys.argv[1], int(sys.argv[2]), int(sys.argv[3])
job = parse_job(demo_text(name).encode(), name)
strip = plan(job.loadings, job.stations, fineness)
first = job.loadings[0]
elastic = Elastic(job.material.E, job.material.nu)
discretise(strip, mesh(strip), elastic, degree, first.start, first.end).factor
"""
# `import pydantic` alone loads little of it: the rest comes with the first model.
BARE_IMPORT = "import numpy, pydantic"
LOADED_IMPORT = "import numpy, pydantic\nclass Model(pydantic.BaseModel):\n    length: float"


def seconds(work: Callable[[], object]) -> float:
    """Seconds that one call takes."""
    before = time.perf_counter()
    work()
    return time.perf_counter() - before


def ours(target: float) -> float:
    """Solve the quarter bar until its stated uncertainty meets the target; the true error of the fibre stress."""
    both = (rectangle(BAR.b - BAR.a, BAR.t),) * 2
    member = Member("inner", (BAR.a, 0.0), 90.0, (Arc(BAR.a, 90.0, both),))
    loads = tuple(EndLoad(end, end, (0.0, 0.0), sign * MOMENT) for end, sign in (("start", 1.0), ("end", -1.0)))
    case, station = loading(member, "free", "free", loads), Station("middle", 0, 0.5)
    fine = refine((case,), (station,), ((True,),), Elastic(E, NU), target).pair.fine
    return float(np.abs([fine.fibre(0, face, station) for face in FACES] / EXACT - 1.0).max())


def plain_runs() -> list[tuple[int, float, float]]:
    """Unknowns, true error and seconds of ever finer plain meshes."""
    runs: list[tuple[int, float, float]] = []
    size = 8.0
    solve_plainly(BAR, MOMENT, E, NU, size)
    while not runs or runs[-1][2] < PATIENCE:
        before = time.perf_counter()
        unknowns, hoop = solve_plainly(BAR, MOMENT, E, NU, size)
        runs.append((unknowns, float(np.abs(hoop / EXACT - 1.0).max()), time.perf_counter() - before))
        size /= 2.0**0.5
    return runs


def fibre_stress() -> None:
    """Print the first comparison."""
    print("1. Fibre stress of a quarter bar, inner radius 30, outer 70 (times in ms)")
    runs = plain_runs()
    ours(1e-3)
    for target in (1e-3, 1e-5):
        own = statistics.median(seconds(lambda target=target: ours(target)) for _ in range(RUNS))
        error = ours(target)
        # The first mesh from which on the error stays within the target: one lucky mesh does not count.
        good = [all(later[1] <= target for later in runs[index:]) for index in range(len(runs))]
        reached = next((run for run, kept in zip(runs, good, strict=True) if kept), None)
        unknowns, left, took = reached or runs[-1]
        said = f"{took / own:.0f} times faster" if reached else f"more than {took / own:.0f} times faster"
        plain = f"{took * 1e3:.0f} with {unknowns} unknowns, error {left:.1e}"
        if not reached:
            plain += f", not reached (stopped after a mesh that took over {PATIENCE:.0f} s)"
        print(f"   to {target:.3%}: intrados {own * 1e3:.1f}, error {error:.1e}; plain {plain}: {said}")


def run(command: list[str]) -> None:
    """Run a command without its output; raises where it fails."""
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)


def in_turn(*commands: list[str]) -> list[float]:
    """Median seconds of each command, run one after the other, RUNS times."""
    rounds = [[seconds(lambda command=command: run(command)) for command in commands] for _ in range(RUNS)]
    return [statistics.median(times) for times in zip(*rounds, strict=True)]


def whole_check(name: str) -> None:
    """Print the second comparison for a demo."""
    with tempfile.TemporaryDirectory() as folder:
        out = Path(folder) / "results"
        command = [*INTRADOS, "check", f"demo:{name}", "--no-figures", "--out", str(out)]
        run(command)
        levels = json.loads((out / "results.json").read_text())["mesh"]["levels"]
        meshes = sum(level["worst"] is None for level in levels)
        least = [sys.executable, "-c", LEAST, name, str(meshes - 1), str(levels[-1]["degree"])]
        whole, floor = in_turn(command, least)
    print(f"   {name}: {whole:.2f} s against {floor:.2f} s, {whole / floor:.2f} times")


def hand_only(name: str) -> None:
    """Print the third comparison for a demo."""
    bare, loaded = ([sys.executable, "-c", code] for code in (BARE_IMPORT, LOADED_IMPORT))
    whole, low, high = in_turn([*INTRADOS, "hand", f"demo:{name}"], bare, loaded)
    print(f"   {name}: {whole:.2f} s against {high:.2f} s, {whole / high:.2f} times; bare, {whole / low:.2f} times")


def three_dimensions(name: str) -> None:
    """Print the fourth comparison for a demo: its sections in three dimensions against the membrane of the member."""
    job = parse_job(demo_text(name).encode(), name)
    elastic = Elastic(job.material.E, job.material.nu)
    compared = tuple(
        tuple(place(loading, station.piece, station.share).comparable for station in job.stations)
        for loading in job.loadings
    )
    member = job.member
    sections = {
        (member.section(station.piece, station.share), R)
        for station in job.stations
        if (R := member.radius(station.piece, station.share)) is not None
    }

    def membrane() -> None:
        refine(job.loadings, job.stations, compared, elastic, MEMBRANE_SHARE * job.agreement.numerical)

    def toroids() -> None:
        solved_section.cache_clear()
        for section, R in sections:
            solved_section(section, R, elastic.nu, SECTION_SHARE * job.agreement.numerical)

    # Once before, for the imports and tables that both share.
    membrane()
    toroids()
    flat, solid = (statistics.median(seconds(work) for _ in range(RUNS)) for work in (membrane, toroids))
    times = f"{1e3 * solid:.0f} ms against {1e3 * flat:.0f} ms, {solid / flat:.2f} times"
    print(f"   {name}: {len(sections)} sections, {times}")


def main() -> None:
    """Run all comparisons."""
    # scikit-fem warns of array layouts at every plain mesh.
    logging.disable(logging.WARNING)
    fibre_stress()
    print("2. A whole check without figures, against imports, one mesh and one factorisation of its final system")
    for name in demo_names():
        whole_check(name)
    print("3. `intrados hand`, against importing numpy and pydantic")
    for name in demo_names():
        hand_only(name)
    print("4. The sections in three dimensions, against the membrane of the member")
    for name in demo_names():
        three_dimensions(name)


if __name__ == "__main__":
    main()
