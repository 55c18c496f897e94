"""Builders of varied jobs, and the plain scan over every setting that searches are held against.

Hammers, cushions and sites are invented.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from matchup.analysis.rig import Rig
from matchup.model.cushion import CushionMaterial, CushionSpace, HammerCushion, Spring
from matchup.model.hammer import Hammer
from matchup.model.job import Job, Search
from matchup.model.limits import StressLimits, stress_limits
from matchup.model.pile import Pile, Section, concrete_modulus
from matchup.model.stage import Stage

PLYWOOD = CushionMaterial(
    "plywood", "pile", 207e6, 0.5, 0.019, 517e6, worn_thickness=0.75, worn_restitution=0.4
)
OAK = CushionMaterial(
    "oak", "pile", 414e6, 0.5, 0.025, 760e6, worn_thickness=0.8, worn_restitution=0.4
)
SOFTWOOD = CushionMaterial(
    "softwood", "pile", 180e6, 0.5, 0.025, 450e6, worn_thickness=0.7, worn_restitution=0.25
)
STIFF_BLOCK = HammerCushion("stiff block", Spring(6e9, 0.9))
SOFT_BLOCK = HammerCushion("soft block", Spring(0.4e9, 0.6))


# --- parts --------------------------------------------------------------------------------------


def concrete(width: float = 0.35, length: float = 14.0, prestress: float = 5e6) -> Pile:
    strength = 50e6
    modulus = concrete_modulus(strength)
    return Pile.uniform(
        "concrete", Section.square(width), length, modulus, 2400.0, strength, prestress
    )


def tube(diameter: float = 0.4, wall: float = 0.012, length: float = 18.0) -> Pile:
    section = Section.pipe(diameter, wall, "closed")
    return Pile.uniform("steel", section, length, 210e9, 7850.0, 310e6)


def timber(diameter: float = 0.32, length: float = 11.0) -> Pile:
    return Pile.uniform("timber", Section.round(diameter), length, 9.45e9, 800.0, 8.6e6)


def hydraulic(tonnes: float, stroke_max: float = 1.2, name: str = "", **more: object) -> Hammer:
    """A hammer with steps of 0.1 m."""
    given = {
        "stroke_min": 0.1,
        "stroke_step": 0.1,
        "efficiency": 0.85,
        "blow_rate_max": 45 / 60,
        "helmet_mass": 400.0 + 80 * tonnes,
        "cushion": Spring(2e9, 0.9),
        "cushion_text": "100 mm nylon",
    }
    return Hammer(
        name or f"hydraulic {tonnes:g} t",
        "hydraulic",
        1e3 * tonnes,
        stroke_max=stroke_max,
        **given | more,  # type: ignore[arg-type]
    )


def drop(tonnes: float, stroke_max: float = 1.0, name: str = "", **more: object) -> Hammer:
    """A hammer whose stroke can be set freely and whose rate falls with the stroke."""
    given = {
        "stroke_min": 0.2,
        "efficiency": 0.55,
        "blow_rate_max": 20 / 60,
        "lift_speed": 0.4,
        "helmet_mass": 250.0 + 80 * tonnes,
        "cushion": Spring(1.5e9, 0.6),
        "cushion_text": "200 mm oak",
    }
    return Hammer(
        name or f"drop {tonnes:g} t",
        "drop",
        1e3 * tonnes,
        stroke_max=stroke_max,
        **given | more,  # type: ignore[arg-type]
    )


def stage(
    name: str, penetration: float, shaft: float, toe: float, set_mm: float = 1.0, **more: object
) -> Stage:
    """A stage; resistances in kN."""
    given = {"toe_quake": 3.0e-3, "shaft_damping": 0.33}
    return Stage(
        name,
        penetration,
        1e3 * shaft,
        1e3 * toe,
        1e-3 * set_mm,
        **given | more,  # type: ignore[arg-type]
    )


SOFT = stage("soft clay", 5.0, 120.0, 60.0, toe_quake=5e-3, shaft_damping=0.65)
MIDDLE = stage("silty sand", 9.0, 350.0, 200.0, shaft_shape=((0.0, 0.2), (9.0, 1.0)))
FINAL = stage("final set", 12.5, 650.0, 550.0, 4.0)
HAMMERS = (hydraulic(3.0), hydraulic(6.0), drop(5.0))


def space(
    materials: Sequence[CushionMaterial] = (PLYWOOD, OAK),
    sheets: Sequence[int] = (),
    thicknesses: Sequence[float] = (),
    area: float = 0.1225,
    wears: Sequence[str] = ("new", "worn"),
) -> CushionSpace:
    return CushionSpace(tuple(materials), tuple(sheets), tuple(thicknesses), area, tuple(wears))


def job(
    pile: Pile | None = None,
    stages: Sequence[Stage] = (FINAL,),
    hammers: Sequence[Hammer] = HAMMERS,
    cushions: CushionSpace | None = None,
    limits: StressLimits | None = None,
    hammer_cushions: Sequence[HammerCushion] = (),
    title: str = "an invented job",
    **search: object,
) -> Job:
    pile = pile or concrete()
    return Job(
        title=title,
        hammers=tuple(hammers),
        pile=pile,
        cushions=cushions,
        stages=tuple(stages),
        limits=limits or stress_limits(pile, "aashto"),
        hammer_cushions=tuple(hammer_cushions),
        search=Search(**search),  # type: ignore[arg-type]
    )


def small_job(**more: object) -> Job:
    """One stage, three hammers and eight cushions."""
    return job(cushions=space(sheets=(3, 6, 9, 12)), **more)  # type: ignore[arg-type]


def steel_job(**more: object) -> Job:
    """A tube driven without a pile cushion."""
    given = {
        "pile": tube(),
        "stages": (
            stage("soft clay", 8.0, 250.0, 150.0),
            stage("dense sand", 16.0, 800.0, 900.0, 4.0),
        ),
        "hammers": (hydraulic(3.0, 1.5), hydraulic(7.0, 1.5), drop(6.0, 1.2)),
    }
    return job(**given | more)  # type: ignore[arg-type]


def timber_job(**more: object) -> Job:
    given = {
        "pile": timber(),
        "stages": (stage("final set", 8.0, 160.0, 120.0, 10.0, toe_quake=5e-3),),
        "hammers": (drop(0.8, 1.5), drop(1.5, 1.5), hydraulic(1.6)),
        "cushions": space((SOFTWOOD, OAK), (1, 2, 3), area=0.08),
    }
    return job(**given | more)  # type: ignore[arg-type]


def large_jobs() -> dict[str, Job]:
    """Twelve varied jobs whose cushion spaces have from 60 to 240 members."""
    thin_to_thick = tuple(np.round(np.arange(0.05, 0.351, 0.01), 3))
    twenty = tuple(range(2, 22))
    three = (PLYWOOD, OAK, SOFTWOOD)
    pair = (HAMMERS[1], HAMMERS[2])
    longer = concrete(0.4, 22.0)
    deep = stage("final set", 20.0, 1100.0, 700.0, 3.0, shaft_shape=((0.0, 0.1), (20.0, 1.0)))
    free = replace(hydraulic(5.0, 1.3, "free hydraulic"), stroke_step=None)
    tight = stress_limits(concrete(), compression_stress=20e6, tension_stress=4e6)
    blocks = (STIFF_BLOCK, SOFT_BLOCK)
    return {
        "one stage, sheets": job(cushions=space(three, twenty), hammers=pair),
        "one stage, thicknesses": job(cushions=space(thicknesses=thin_to_thick), hammers=pair),
        "two stages": job(stages=(SOFT, FINAL), cushions=space(three, twenty), hammers=HAMMERS),
        "three stages": job(
            stages=(SOFT, MIDDLE, FINAL), cushions=space(three, range(3, 25)), hammers=HAMMERS
        ),
        "tight limits": job(
            stages=(SOFT, FINAL),
            cushions=space(three, range(4, 44)),
            limits=tight,
            hammers=(*pair, free),
        ),
        "hammer cushions": job(
            stages=(SOFT, FINAL),
            cushions=space((PLYWOOD, OAK), range(2, 32)),
            hammer_cushions=blocks,
            hammers=pair,
        ),
        "reserve": job(
            stages=(SOFT, FINAL), cushions=space(three, twenty), hammers=HAMMERS, reserve=0.1
        ),
        "long pile": job(
            longer,
            (deep,),
            (hydraulic(7.0, 1.5), hydraulic(9.0, 1.5)),
            space(area=0.16, sheets=range(4, 44)),
        ),
        "long pile, three stages": job(
            longer,
            (stage("soft clay", 8.0, 220.0, 110.0, toe_quake=6.7e-3), MIDDLE, deep),
            (hydraulic(7.0, 1.5), free),
            space(area=0.16, sheets=range(4, 40)),
        ),
        "fastest": job(
            stages=(SOFT, FINAL), cushions=space(three, twenty), hammers=pair, objective="time"
        ),
        "timber": timber_job(cushions=space(three, range(1, 25), area=0.08)),
        "new cushion only": job(
            stages=(SOFT, FINAL),
            cushions=space((OAK, SOFTWOOD), range(2, 40), wears=("new",)),
            hammers=(hydraulic(4.0), free),
        ),
    }


# --- the plain scan -----------------------------------------------------------------------------


def all_settings(hammer: Hammer) -> list[float]:
    """Every stroke that can be planned: steps from the least, and always the largest."""
    step = hammer.stroke_step or 0.01
    strokes = [hammer.stroke_min]
    while strokes[0] + len(strokes) * step < hammer.stroke_max - 1e-9:
        strokes.append(strokes[0] + len(strokes) * step)
    if hammer.stroke_max > hammer.stroke_min:
        strokes.append(hammer.stroke_max)
    return strokes


@dataclass(frozen=True)
class Scan:
    """What every setting of one stage, hammer and stack does, the worst wear state counting."""

    strokes: list[float]
    sets: list[float]
    compression: list[float]
    tension: list[float]

    def holds(self, i: int, compression: float, tension: float) -> bool:
        return self.compression[i] <= compression and self.tension[i] <= tension


def scan(rig: Rig, stage: int, hammer: int, stack: int) -> Scan:
    """Compute every blow of a cell: all settings and wear states, at 0.98, 1 and 1.02 times."""
    strokes = all_settings(rig.job.hammers[hammer])
    kinds = [(wear, factor) for wear in range(len(rig.wears)) for factor in (0.98, 1.0, 1.02)]
    columns = np.array([(wear, factor * s) for s in strokes for wear, factor in kinds])
    same = [np.full(len(columns), place) for place in (stage, hammer, stack)]
    answers = rig.answer(*same, columns[:, 0].astype(np.int64), columns[:, 1].copy())
    shape = (len(strokes), len(rig.wears), 3)
    assert answers.sound.all()
    return Scan(
        strokes,
        answers.set.reshape(shape)[:, :, 1].min(axis=1).tolist(),
        answers.compression.reshape(shape).max(axis=(1, 2)).tolist(),
        answers.tension.reshape(shape).max(axis=(1, 2)).tolist(),
    )


def next_scanned(strokes: Sequence[float], at: int) -> int:
    """The documented scan: the farthest setting whose 2 % touch this one's, or the next one."""
    far = at + 1
    while far + 1 < len(strokes) and strokes[far + 1] <= 1.04 * strokes[at] + 1e-12:
        far += 1
    return far


@dataclass(frozen=True)
class Found:
    """What the plain scan makes of a cell: `state` as in the window module, and a setting."""

    state: str
    at: int
    lifted: bool = False


def plain_window(cell: Scan, set_needed: float, compression: float, tension: float) -> Found:
    """Return the lowest stroke of the window, by the documented rule, from all settings."""
    reaching = [i for i, s in enumerate(cell.sets) if s >= set_needed]
    if not reaching:
        return Found("no set", len(cell.strokes) - 1)
    first = reaching[0]
    if cell.holds(first, compression, tension):
        return Found("open", first)
    squeezed, pulled = cell.compression[first] / compression, cell.tension[first] / tension
    closed = Found("compression" if squeezed >= pulled else "tension", first)
    if squeezed > 1:
        return closed
    at = first
    while at < len(cell.strokes) - 1:
        at = next_scanned(cell.strokes, at)
        if cell.compression[at] > compression:
            return closed
        if cell.tension[at] <= tension:
            return Found("open", at, lifted=True)
    return closed


def plain_top(cell: Scan, low: int, compression: float, tension: float) -> int:
    """Return the last setting of the window: all settings from `low` on hold."""
    at = low
    while at + 1 < len(cell.strokes) and cell.holds(at + 1, compression, tension):
        at += 1
    return at


def energy(hammer: Hammer, stroke: float) -> float:
    return hammer.ram_mass * 9.80665 * stroke


def close(a: float, b: float) -> bool:
    return math.isclose(a, b, rel_tol=1e-9, abs_tol=1e-12)
