"""Builders of plans and options whose figures are chosen, not computed."""

from __future__ import annotations

import math
from collections.abc import Sequence

from matchup.model.cushion import Cushion, HammerCushion, Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.option import DRIVES, Option, Ranking, StagePlan
from tests import jobs

STAGE = jobs.FINAL
"""Needs 4 mm; 1200 kN."""


def sheets(count: int, hammer: HammerCushion | None = None) -> Stack:
    return Stack(Cushion(jobs.OAK, count * 0.025, 0.16, count), hammer)


def plan(
    stroke: float = 0.5,
    set_mm: float = 4.2,
    compression: float = 0.5,
    tension: float = 0.6,
    stage: Stage = STAGE,
    **more: object,
) -> StagePlan:
    """A plan with uses of a limit of 100 MPa on either side, a blow energy of 1 kJ per cm."""
    given = {
        "at": 0,
        "low": stroke,
        "top": stroke,
        "blow_energy": 1e5 * stroke,
        "transferred": 5e4 * stroke,
        "blow_rate": 0.5,
        "verdict": DRIVES,
        "shortfall": 0.0,
    }
    return StagePlan(
        stage=stage,
        stroke=stroke,
        set=1e-3 * set_mm,
        compression=1e8 * compression,
        tension=1e8 * tension,
        compression_use=compression,
        tension_use=tension,
        **given | more,  # type: ignore[arg-type]
    )


def running(stage: Stage) -> StagePlan:
    """A stage at which the pile runs: there is no blow, so there are no figures."""
    nothing = math.nan
    return plan(0.2, 0.0, nothing, nothing, stage, transferred=nothing, verdict="pile runs")


def option(
    *plans: StagePlan, verdict: str = DRIVES, hammer: Hammer | None = None, **more: object
) -> Option:
    plans = plans or (plan(),)
    given = {
        "governs": "set",
        "stack": sheets(4),
        "target": plans[-1],
        "cost": plans[-1].blow_energy,
        "certificate": "exact: all 8 cushions",
    }
    if verdict not in (DRIVES, "drives with reduced stroke"):
        given["failing"] = plans[0]  # type: ignore[assignment]
    return Option(
        hammer or jobs.hydraulic(5.0, name="Curlew"),
        verdict,
        plans=plans,
        **given | more,  # type: ignore[arg-type]
    )


def ranking(
    options: Sequence[Option] = (),
    rejected: Sequence[Option] = (),
    job: Job | None = None,
    analyses: int = 120,
) -> Ranking:
    return Ranking(job or jobs.small_job(), tuple(options), tuple(rejected), analyses, 0.25)
