"""From pile, stages, hammers and cushions to the arrays that the wave solver marches."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import NamedTuple

import numpy as np

from matchup.errors import AnalysisError
from matchup.model.cushion import Spring
from matchup.model.hammer import STANDARD_GRAVITY, Hammer
from matchup.model.job import Analysis
from matchup.model.pile import Part, Pile
from matchup.model.stage import Stage
from matchup.wave.layout import SUBSTEPS, Bar, Blows, Floats, Grounds, Integers
from matchup.wave.rest import rest

CUSHIONED_TRAVEL = 0.145e-3
"""Longest travel time of a segment under a pile cushion, about 0.57 m of concrete. [s]"""
BARE_TRAVEL = 0.08e-3
"""The same for a helmet on the pile, where the wave front is steeper: 0.4 m of steel. [s]"""
TIMBER_TRAVEL = 0.07e-3
"""The same for a timber pile, whose small impedance hardly damps the ringing of the helmet. [s]"""
FEWEST_SEGMENTS = 16
MORE_SEGMENTS = 1.5
"""A pile of several parts may be cut into so many times the segments, to round their times less."""
HEAD_ACCURACY = 0.3
"""Sub-step of the head times the largest circular frequency of ram and helmet."""
RAM_CONTACT = Spring(3.5e9, 0.9)
"""Ram on helmet where there is no hammer cushion: steel on steel; from memory."""
PILE_CONTACT_LENGTH = 0.5
"""Helmet on pile where there is no pile cushion: the stiffness of so much pile; our choice. [m]"""
PILE_CONTACT_RESTITUTION = 0.9
"""Of that contact; our choice. [-]"""
SOFT_TOE_SHARE = 0.2
"""Below this share of the toe in the resistance, the set is measured with the mean quake."""


class Cut(NamedTuple):
    """A pile cut into segments.

    Parameters
    ----------
    bar : Bar
    depth : (nodes,) float64 array
        Distance of the nodes from the head. [m]
    part : (segments,) int64 array
        Which part of the pile's column a segment belongs to.
    """

    bar: Bar
    depth: Floats
    part: Integers


def segment_counts(pile: Pile, segments: int) -> Integers:
    """Return the number of segments of each part.

    They are shared out by travel time, what is left over to the parts that fall shortest, so that
    the travel time of the whole pile is exact and that of a part is off by less than one step. A
    part that is crossed in less than a step gets one segment all the same.
    """
    times = np.array([part.travel_time for part in pile.column])
    share = times / times.sum() * segments
    counts: Integers = np.maximum(1, np.floor(share + 1e-9)).astype(np.int64)
    for _ in range(segments - int(counts.sum())):
        counts[np.argmax(share - counts)] += 1
    return counts


def cut_bar(pile: Pile, gravity: float, segments: int) -> Cut:
    """Cut a pile into segments of equal travel time.

    A part keeps its length, section, impedance and weight. What rounding changes is its travel
    time, see `segment_counts`, and with it in the same ratio its inertia. For a pile of one part
    there is no rounding. A driving shoe makes the last segment as much heavier as it weighs.

    Parameters
    ----------
    pile : Pile
    gravity : float
        Along the pile; zero for nodes without weight. [m/s2]
    segments : int
        Number wanted in all.
    """
    counts = segment_counts(pile, segments)
    step = sum(part.travel_time for part in pile.column) / int(counts.sum())
    rows = np.array(
        [row for p, n in zip(pile.column, counts, strict=True) for row in _segments(p, int(n))]
    )
    length, impedance, area, mass = rows.T
    weight = np.zeros(length.size + 1)
    weight[:-1] += 0.5 * gravity * mass
    weight[1:] += 0.5 * gravity * mass
    weight[-1] += gravity * pile.shoe_mass
    impedance[-1] += pile.shoe_mass / step
    depth = np.concatenate(([0.0], np.cumsum(length)))
    bar = Bar(step, impedance.copy(), area.copy(), weight)
    return Cut(bar, depth, np.repeat(np.arange(counts.size), counts))


def _segments(part: Part, count: int) -> list[tuple[float, float, float, float]]:
    """Return length, impedance, bearing area and mass of the segments of a part, head first.

    Of a tapered part impedance and mass are those of the mean area of a segment; the area that a
    stress is reckoned on is that at its upper end, and of the last one that of the toe, so that
    stresses at nodes are those of the section there.
    """
    section, length = part.section, part.length / count
    ends = np.linspace(0.0, 1.0, count + 1).tolist()
    means = [section.area_between(a, b) / section.area for a, b in pairwise(ends)]
    nodes = [section.area_at(share) / section.area for share in (*ends[:-2], 1.0)]
    return [
        (
            length,
            mean * part.impedance,
            node * part.bearing_area,
            mean * part.mass_per_length * length,
        )
        for mean, node in zip(means, nodes, strict=True)
    ]


def enough_segments(pile: Pile, cushioned: bool, stages: Sequence[Stage] = ()) -> int:
    """Return the number of segments that meets the accuracy asked of a blow.

    Found by comparing random realistic blows with refinements; the figures stand in the
    contributor guide. Very stiff toes shorten the step further, so that the toe spring gives way
    less in half a step than the pile. Of several parts, so many more that the rounding of their
    travel times is least.
    """
    longest = CUSHIONED_TRAVEL if cushioned else BARE_TRAVEL
    if any(part.material == "timber" for part in pile.column):
        longest = TIMBER_TRAVEL
    for stage in stages:
        if stage.toe > 0:
            longest = min(longest, 2 * pile.toe.impedance * stage.toe_quake / stage.toe)
    times = np.array([part.travel_time for part in pile.column])
    least = max(FEWEST_SEGMENTS, math.ceil(float(times.sum()) / longest))
    if times.size == 1:
        return least

    def rounding(segments: int) -> float:
        counts = segment_counts(pile, segments)
        return float(np.abs(counts * times.sum() / counts.sum() / times - 1).max())

    candidates = range(least, math.ceil(MORE_SEGMENTS * least) + 1)
    return min(candidates, key=rounding)


def pile_contact(pile: Pile) -> Spring:
    """Return the spring between helmet and pile where there is no pile cushion."""
    head = pile.head
    stiffness = head.impedance_at(0.0) * head.wave_speed / PILE_CONTACT_LENGTH
    return Spring(stiffness, PILE_CONTACT_RESTITUTION)


def shaft_strengths(stage: Stage, column_length: float, depth: Floats) -> Floats:
    """Return a stage's shaft resistance lumped at the nodes.

    Each node takes what acts along half a segment to either side, from the exact integral of the
    piecewise linear intensity; the head node hands its share to the next.

    Parameters
    ----------
    column_length : float
        Of the pile, with its follower. [m]
    depth : (nodes,) float64 array
        Distance of the nodes from the head. [m]

    Returns
    -------
    (nodes,) float64 array
        [N]
    """
    below_ground = depth - (column_length - stage.penetration)
    edges = np.concatenate(
        ([below_ground[0]], 0.5 * (below_ground[1:] + below_ground[:-1]), [below_ground[-1]])
    )
    shape = stage.shaft_shape or ((0.0, 1.0), (stage.penetration, 1.0))
    at, intensity = np.array(shape).T
    # The integral of a piecewise linear function is piecewise quadratic between its rows.
    total = np.concatenate(([0.0], np.cumsum(0.5 * np.diff(at) * (intensity[1:] + intensity[:-1]))))
    ends = np.clip(edges, max(at[0], 0.0), min(at[-1], stage.penetration))
    row = np.clip(np.searchsorted(at, ends, side="right") - 1, 0, at.size - 2)
    value = np.interp(ends, at, intensity)
    upto = total[row] + 0.5 * (ends - at[row]) * (intensity[row] + value)
    strength = stage.shaft * np.diff(upto) / (upto[-1] - upto[0])
    strength[1] += strength[0]
    strength[0] = 0.0
    return np.asarray(strength)


def set_quake(stage: Stage) -> tuple[float, str]:
    """Return the quake taken off the largest toe displacement [m], and what it is."""
    if stage.toe >= SOFT_TOE_SHARE * stage.resistance:
        return stage.toe_quake, "toe quake"
    quake = (stage.shaft * stage.shaft_quake + stage.toe * stage.toe_quake) / stage.resistance
    return quake, "mean of shaft and toe quake, weighted by resistance"


@dataclass(frozen=True, slots=True)
class Chains:
    """All combinations of stage and hammer on one pile, ready to march.

    Parameters
    ----------
    bar : Bar
    depth : (nodes,) float64 array
        Distance of the nodes from the head. [m]
    grounds : Grounds
        One row for each stage and static load.
    ground_of : (stages, hammers) int64 array
        Row of `grounds`; -1 where the weight exceeds the resistance: the pile runs.
    weights : (hammers,) float64 array
        Of the pile and all that stands on it, ram included. [N]
    hammers : tuple of Hammer
    stages : tuple of Stage
    gravity : float
        Along the pile, or zero. [m/s2]
    part : (segments,) int64 array
        Which part of the pile's column a segment belongs to.
    rake : float
        [rad]
    resistances : (stages,) float64 array
        Shaft and toe together. [N]
    set_quakes : (stages,) float64 array
        See `set_quake`. [m]
    """

    bar: Bar
    depth: Floats
    grounds: Grounds
    ground_of: Integers
    weights: Floats
    hammers: tuple[Hammer, ...]
    stages: tuple[Stage, ...]
    gravity: float
    part: Integers
    rake: float
    resistances: Floats
    set_quakes: Floats


def build_chains(
    pile: Pile,
    stages: Sequence[Stage],
    hammers: Sequence[Hammer],
    analysis: Analysis,
    segments: int,
) -> Chains:
    """Build what the solver needs for every stage and hammer.

    Parameters
    ----------
    segments : int
        Segments of the pile; see `enough_segments`.

    Raises
    ------
    AnalysisError
        If the state at rest can't be found.
    """
    gravity = STANDARD_GRAVITY * math.cos(pile.rake) if analysis.gravity else 0.0
    bar, depth, part = cut_bar(pile, gravity, segments)
    strengths = [shaft_strengths(stage, float(depth[-1]), depth) for stage in stages]
    ground_of = np.full((len(stages), len(hammers)), -1, np.int64)
    loads = [gravity * ((h.helmet_mass or 0.0) + h.frame_mass) for h in hammers]
    rams = np.array([gravity * hammer.ram_mass for hammer in hammers])
    weights = bar.weight.sum() + np.array(loads) + rams
    rows: dict[tuple[int, float], int] = {}
    settlements: list[Floats] = []
    of_row: list[int] = []
    for s, stage in enumerate(stages):
        for h, load in enumerate(loads):
            key = (s, load)
            if key not in rows:
                settlement = _settle(stage, strengths[s], bar, load)
                rows[key] = -1 if settlement is None else len(settlements)
                if settlement is not None:
                    settlements.append(settlement)
                    of_row.append(s)
            # A ram heavier than what is left of the resistance would push the pile on without end.
            runs = gravity > 0 and weights[h] >= stage.resistance
            ground_of[s, h] = -1 if runs else rows[key]
    nodes = depth.size
    strength = np.array([strengths[s] for s in of_row]).reshape(-1, nodes)
    quake = np.array([stages[s].shaft_quake for s in of_row]).reshape(-1, 1)
    damping = np.array([stages[s].shaft_damping for s in of_row]).reshape(-1, 1)
    toe = [
        [stages[s].toe / stages[s].toe_quake, stages[s].toe, stages[s].toe_damping] for s in of_row
    ]
    grounds = Grounds(
        strength / quake,
        strength,
        np.repeat(damping, nodes, axis=1),
        np.array(toe).reshape(-1, 3),
        np.array(settlements).reshape(-1, nodes),
        analysis.damping == "smith",
    )
    return Chains(
        bar,
        depth,
        grounds,
        ground_of,
        weights,
        tuple(hammers),
        tuple(stages),
        gravity,
        part,
        pile.rake,
        np.array([stage.resistance for stage in stages]),
        np.array([set_quake(stage)[0] for stage in stages]),
    )


def _settle(stage: Stage, strength: Floats, bar: Bar, load: float) -> Floats | None:
    if load + bar.weight.sum() >= stage.resistance:
        return None
    settlement, settled = rest(
        load,
        bar.weight,
        bar.impedance / bar.step,
        strength / stage.shaft_quake,
        strength,
        stage.toe / stage.toe_quake,
        stage.toe,
    )
    if not settled:
        raise AnalysisError(
            f"stage {stage.name!r}: the pile's state at rest before the blow was not found"
        )
    return np.asarray(settlement)


def head_rows(
    chains: Chains,
    hammer: Integers,
    loading: Floats,
    restitution: Floats,
    stroke: Floats,
    hammer_stiffness: Floats | None = None,
    hammer_restitution: Floats | None = None,
) -> tuple[Floats, Integers]:
    """Return the head of each blow and its number of sub-steps.

    Parameters
    ----------
    hammer : (blows,) int64 array
        Row of ``chains.hammers``.
    loading, restitution : (blows,) float64 array
        Pile cushion: loading stiffness [N/m] and coefficient of restitution.
    stroke : (blows,) float64 array
        [m]
    hammer_stiffness, hammer_restitution : (blows,) float64 array or None
        Hammer cushion in place of the hammer's own; NaN keeps that. [N/m], [-]

    Returns
    -------
    head : (blows, 9) float64 array
        As in `matchup.wave.layout.Blows`.
    substeps : (blows,) int64 array
        A power of two, so that blows gather in few kinds of groups.
    """
    table = np.array([_hammer_row(h, chains.rake) for h in chains.hammers])[hammer]
    ram, drive, loading_1, unloading_1, helmet, frame = table.T
    if hammer_stiffness is not None and hammer_restitution is not None:
        own = np.isnan(hammer_stiffness)
        loading_1 = np.where(own, loading_1, hammer_stiffness)
        unloading_1 = np.where(own, unloading_1, hammer_stiffness / hammer_restitution**2)
    unloading = loading / restitution**2
    velocity = np.sqrt(2 * STANDARD_GRAVITY * stroke * drive)
    head = np.column_stack(
        (
            ram,
            velocity,
            loading_1,
            unloading_1,
            helmet,
            loading,
            unloading,
            chains.gravity * ram,
            chains.gravity * (helmet + frame),
        )
    )
    frequency = np.sqrt((unloading_1 + unloading) / helmet + unloading_1 / ram)
    wanted = np.maximum(chains.bar.step * frequency / HEAD_ACCURACY, SUBSTEPS)
    substeps = (2 ** np.ceil(np.log2(wanted))).astype(np.int64)
    return np.ascontiguousarray(head), substeps


def _hammer_row(hammer: Hammer, rake: float) -> tuple[float, ...]:
    spring = hammer.cushion or RAM_CONTACT
    return (
        hammer.ram_mass,
        hammer.share_at_impact(rake),
        spring.stiffness,
        spring.stiffness / spring.restitution**2,
        hammer.helmet_mass or 0.0,
        hammer.frame_mass,
    )


def march_rows(ground: Integers, head: Floats, substeps: Integers) -> Blows:
    """Return the solver's table of blows."""
    return Blows(np.ascontiguousarray(ground), np.ascontiguousarray(substeps), head)
