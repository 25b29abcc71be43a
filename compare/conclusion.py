"""What an engineer should conclude: what to know first, what governs, and the sentence that says it."""

from __future__ import annotations

from collections.abc import Sequence

from intrados.compare.job import Job
from intrados.compare.ladder import largest_term
from intrados.compare.numeral import common_scale
from intrados.compare.results import Along, Fibre, FibreName, Governing, Peak, StationResult
from intrados.compare.units import Units
from intrados.theory.load import BodyLoad, EndLoad
from intrados.theory.member import Arc, Member
from intrados.theory.spread import BodySpread

# Stresses closer than this are a tie, which the station nearer the start wins.
_TIE = 1e-9
# A peak between stations is worth a word when it exceeds the governing station by more than this share.
_NOTEWORTHY = 0.02
# Stations that carry less than this share of the governing stress are counted apart.
_FAINT = 0.05
# A fibre with less than this share of it is not worth naming as the one that is farthest off.
_WORTH = 0.5
_FIBRES: tuple[FibreName, FibreName] = ("inner", "outer")


def notes(job: Job, cases: Sequence[tuple[StationResult, ...]]) -> tuple[str, ...]:
    """What the reader must know before any number, most important first."""
    about = [
        _about_plane_stress(job, cases),
        _about_unknown_width(cases),
        *_about_loads(job),
        *_about_joints(job),
        *_about_motion(job),
    ]
    return tuple(dict.fromkeys(note for note in about if note))


def _about_plane_stress(job: Job, cases: Sequence[tuple[StationResult, ...]]) -> str:
    """Says so, with the worst fibre, where the plane-stress FE is itself farther off than the agreement band."""
    worst: tuple[float, StationResult, FibreName] | None = None
    for stations in cases:
        for station in stations:
            for name in _FIBRES:
                fibre: Fibre = getattr(station, name)
                if fibre.verdict in ("not comparable", "unloaded") or fibre.best == 0.0:
                    continue
                share = abs(fibre.budget.width) / abs(fibre.best)
                is_large = abs(fibre.best) >= _FAINT * max(abs(station.inner.best), abs(station.outer.best))
                if is_large and share > job.agreement.band and (worst is None or share > worst[0]):
                    worst = (share, station, name)
    if worst is None:
        return ""
    _, station, name = worst
    fibre = getattr(station, name)
    scale = common_scale([fibre.fe, fibre.best])
    decimals = scale.decimals(fibre.fe, fibre.best)
    where = {"over the web": "over the web", "edge": "at the edge", "between": "between middle and edge"}.get(
        fibre.place or "", "at mid-width"
    )
    return (
        f"The plane-stress FE is itself far off for this section: at {station.name}, {name} fibre, it says "
        f"{scale.text(fibre.fe, decimals)}{scale.exponent} {job.units.stress} where the three-dimensional section has "
        f"{scale.text(fibre.best, decimals)}{scale.exponent} {job.units.stress} {where}. Read 'best', which adds that."
    )


def _about_unknown_width(cases: Sequence[tuple[StationResult, ...]]) -> str:
    """Says at which stations the three-dimensional section is not known, so that nothing is concluded there."""
    names = [station.name for station in cases[0] if station.zone is None]
    if not names:
        return ""
    return (
        f"The three-dimensional section cannot be solved on a taper between unlike hollow sections: stations "
        f"{', '.join(names)} are not compared."
    )


def _about_loads(job: Job) -> list[str]:
    found = []
    asked = {load.name: load for load in job.loads if not isinstance(load, EndLoad)}
    for loading in job.loadings:
        for spread in loading.spreads:
            load = asked[spread.name]
            if isinstance(load, BodyLoad):
                continue
            if isinstance(spread, BodySpread):
                found.append(
                    f"Load {spread.name} is on a face of zero width: it enters as a body force over the depth with the "
                    "same resultant."
                )
            if abs(spread.centre - load.share) > 1e-6:
                extent = job.member.extent(spread.piece)
                unit = "deg" if isinstance(job.member.pieces[spread.piece], Arc) else job.units.length
                found.append(
                    f"Bearing {spread.name} settles at {spread.centre * extent:.4g} {unit} of piece "
                    f"{spread.piece + 1}, where the face's normal is parallel to its force, "
                    f"not at {load.share * extent:.4g} {unit}."
                )
    return found


def _about_joints(job: Job) -> list[str]:
    pieces = job.member.pieces
    jumps = [
        str(index) for index in range(1, len(pieces)) if pieces[index - 1].sections[1] != pieces[index].sections[0]
    ]
    if not jumps:
        return []
    return [f"The width jumps at the end of piece {', '.join(jumps)}: fibre stress beside the jump is local."]


def _about_motion(job: Job) -> list[str]:
    if job.loadings[0].start == job.loadings[0].end == "free":
        return ["Both ends are free: displacements are relative to the section at the start."]
    return []


def peak(curves: Along, member: Member) -> Peak | None:
    """The largest FE fibre stress outside load introduction and support, at stations or not."""
    best: Peak | None = None
    for fibre, curve in zip(_FIBRES, (curves.inner, curves.outer), strict=True):
        for index, comparable in enumerate(curves.comparable):
            stress = curve.fe[index]
            if not comparable or (best is not None and abs(stress) <= abs(best.stress) * (1.0 + _TIE)):
                continue
            piece = curves.piece[index] - 1
            position = curves.share[index] * member.extent(piece)
            is_arc = isinstance(member.pieces[piece], Arc)
            best = Peak(
                fibre=fibre,
                piece=piece + 1,
                angle=position if is_arc else None,
                distance=None if is_arc else position,
                s=curves.s[index],
                stress=stress,
                uncertainty=curve.uncertainty[index],
                hand=curve.hand[index],
            )
    return best


def governing(stations: tuple[StationResult, ...], highest: Peak | None, job: Job) -> Governing | None:
    """The comparable fibre with the largest |best| and what to conclude; None where no station can be compared."""
    chosen: tuple[StationResult, FibreName, Fibre] | None = None
    for station in stations:
        for name in _FIBRES:
            fibre: Fibre = getattr(station, name)
            if fibre.verdict in ("not comparable", "unloaded"):
                continue
            if chosen is None or abs(fibre.best) > abs(chosen[2].best) * (1.0 + _TIE):
                chosen = (station, name, fibre)
    if chosen is None:
        return None
    station, name, fibre = chosen
    sentences = [
        _first_sentence(station, name, fibre, job),
        _farthest_off(stations, station, name, fibre.best),
        _elsewhere(stations, fibre.best),
        _beyond_comparison(stations, fibre, job.units),
        _between_stations(highest, fibre, job.units),
    ]
    return Governing(
        station=station.name,
        fibre=name,
        hand=fibre.hand,
        best=fibre.best,
        uncertainty=fibre.uncertainty,
        difference=fibre.difference,
        verdict=fibre.verdict,
        why=" ".join(sentence for sentence in sentences if sentence),
        utilisation=station.utilisation,
    )


def _first_sentence(station: StationResult, name: FibreName, fibre: Fibre, job: Job) -> str:
    scale = common_scale([fibre.hand, fibre.best])
    decimals = scale.decimals(fibre.hand, fibre.best)
    unit, power = job.units.stress, scale.exponent
    numbers = (
        f"hand {scale.text(fibre.hand, decimals)}{power} {unit}, best {scale.text(fibre.best, decimals)}{power} "
        f"± {scale.bound(fibre.uncertainty, decimals)}{power} {unit}"
    )
    place = f"at the governing station {station.name}, {name} fibre ({numbers})"
    band = f"{100.0 * job.agreement.band:g} %"
    off = 100.0 * abs(fibre.difference or 0.0)
    if fibre.verdict == "holds":
        return f"The hand theory holds {place}: it is within the band of {band}."
    cause = _cause(station, name, fibre)
    if fibre.verdict == "low":
        return (
            f"Do not rely on the hand theory {place}: it is {off:.1f} % low, on the unsafe side, "
            f"beyond the band of {band}. {cause}"
        )
    return f"The hand theory is {off:.1f} % high {place}, on the safe side but beyond the band of {band}. {cause}"


def _cause(station: StationResult, name: FibreName, fibre: Fibre) -> str:
    """Which assumption costs most at a fibre, in plain words and percent of the best estimate."""
    terms = fibre.budget
    cause = largest_term(terms)
    share = 100.0 * abs(getattr(terms, cause)) / abs(fibre.best)
    if cause == "thick":
        return f"The bend is too thick for its radius (R/h {station.curvature_ratio:.3g}): that alone is {share:.1f} %."
    if cause == "width" and fibre.place == "over the web":
        return (
            f"The {name} flange bends out of the plane, so that its full width does not carry: that is {share:.1f} %."
        )
    if cause == "width":
        return f"The section changes its shape across its width, which the theory leaves out: that is {share:.1f} %."
    if station.zone == "joint":
        return f"Curvature or section change close by: that is {share:.1f} %."
    return f"The way the load enters still reaches here: that is {share:.1f} %."


def _farthest_off(
    stations: tuple[StationResult, ...], decisive: StationResult, decisive_name: FibreName, governing_stress: float
) -> str:
    """Names the loaded fibre on which the theory is lowest, where that is not the governing one."""
    low = [
        (abs(getattr(station, name).difference or 0.0), station, name)
        for station in stations
        for name in _FIBRES
        if getattr(station, name).verdict == "low"
        and abs(getattr(station, name).best) >= _WORTH * abs(governing_stress)
    ]
    if not low:
        return ""
    off, station, name = max(low, key=lambda item: item[0])
    if (station.name, name) == (decisive.name, decisive_name):
        return ""
    cause = _cause(station, name, getattr(station, name))
    return f"It is farthest off at {station.name}, {name} fibre: {100.0 * off:.1f} % low. {cause}"


def _elsewhere(stations: tuple[StationResult, ...], governing_stress: float) -> str:
    """How the theory does at all compared stations that carry a stress worth the name."""
    fibres = [(station.inner, station.outer) for station in stations]
    compared = [pair for pair in fibres if not {"not comparable", "unloaded"} & {fibre.verdict for fibre in pair}]
    loaded = [pair for pair in compared if max(abs(fibre.best) for fibre in pair) >= _FAINT * abs(governing_stress)]
    holding = sum(all(fibre.verdict == "holds" for fibre in pair) for pair in loaded)
    unsafe = sum(any(fibre.verdict == "low" for fibre in pair) for pair in loaded)
    faint = len(compared) - len(loaded)
    rest = f" ({faint} more carry less than {100.0 * _FAINT:g} % of the governing stress.)" if faint else ""
    if holding == len(loaded):
        return f"It holds on both fibres at all {len(loaded)} loaded stations compared.{rest}"
    return (
        f"Of {len(loaded)} loaded stations compared it holds on both fibres at {holding} and is low, on the unsafe "
        f"side, at {unsafe}.{rest}"
    )


def _beyond_comparison(stations: tuple[StationResult, ...], fibre: Fibre, units: Units) -> str:
    """Names a station outside comparison whose hand stress is larger than the governing one."""
    apart = [
        (max(abs(station.inner.hand), abs(station.outer.hand)), station)
        for station in stations
        if station.inner.verdict == "not comparable"
    ]
    if not apart:
        return ""
    largest, station = max(apart, key=lambda pair: pair[0])
    if largest <= abs(fibre.hand):
        return ""
    reason = {"introduction": "a load enters there", "support": "it is within one depth of the clamped end"}.get(
        station.zone or "", "its three-dimensional section is not known"
    )
    stress = common_scale([largest]).quantity(largest, units.stress)
    return f"Station {station.name} has a larger hand stress, {stress}, but cannot be compared: {reason}."


def _between_stations(highest: Peak | None, fibre: Fibre, units: Units) -> str:
    if highest is None or abs(highest.stress) <= (1.0 + _NOTEWORTHY) * abs(fibre.fe):
        return ""
    stress = common_scale([highest.stress]).quantity(highest.stress, units.stress)
    where = f"{highest.angle:.4g} deg" if highest.angle is not None else f"{highest.distance:.4g} {units.length}"
    return (
        f"Between stations the FE reaches {stress} ({highest.fibre} fibre, piece {highest.piece} at {where}): "
        "set a station there."
    )
