"""Results as the JSON documents that scripts read: fixed names, fixed units, absent is null."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any

from matchup.analysis.single import Blow
from matchup.model.cushion import Cushion
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import PartLimits
from matchup.report.bills import bill_document
from matchup.report.doubted import odds_document
from matchup.report.sentences import misfit_text, reason
from matchup.report.shown import Units
from matchup.search.option import Cure, Option, Ranking, StagePlan
from matchup.search.tradeoff import is_beaten

SCHEMA_VERSION = 1


def limits_document(job: Job) -> dict[str, object]:
    """Return the stress limits and their sources."""
    limits = job.limits
    parts = [{"part": part.part or None, **_part_limits(part)} for part in limits.parts]
    return {
        **_part_limits(limits.parts[-1]),
        "warnings": list(limits.warnings),
        "parts": parts if len(parts) > 1 else None,
    }


def _part_limits(part: PartLimits) -> dict[str, object]:
    """Return both limits of a part; null where they are not limited."""
    return {
        "compression_MPa": number(part.squeeze.stress, 1e-6),
        "tension_MPa": number(part.pull.stress, 1e-6),
        "compression_rule": part.squeeze.text,
        "compression_values_MPa": {name: value / 1e6 for name, value in part.squeeze.values},
        "tension_rule": part.pull.text,
        "tension_values_MPa": {name: value / 1e6 for name, value in part.pull.values},
    }


def peak(stresses: Iterable[float], job: Job) -> float | None:
    """Return the largest stress [MPa]; None where parts have limits, and so peaks, of their own."""
    return None if job.limits.differ else number(max(stresses), 1e-6)


def number(value: float | None, scale: float = 1.0) -> float | None:
    """Return a number times `scale`, or None where it is absent or not finite."""
    return None if value is None or not math.isfinite(value) else float(value) * scale


def energy_set(hammer: Hammer, stroke: float) -> float | None:
    """Return a hammer's setting where that is an energy [kJ], and the stroke its equivalent."""
    return hammer.blow_energy(stroke) / 1e3 if hammer.set_by_energy else None


def cushion_document(cushion: Cushion | None) -> dict[str, object] | None:
    """Return a pile cushion."""
    if cushion is None:
        return None
    return {
        "material": cushion.material.name,
        "sheets": cushion.sheets,
        "thickness_mm": 1e3 * cushion.thickness,
    }


def hammer_cushion(option: Option) -> str:
    """Return an option's hammer cushion in words."""
    return option.stack.hammer.text if option.stack.hammer else option.hammer.cushion_text


def cure_document(cure: Cure | None) -> dict[str, object] | None:
    """Return what would let a failing hammer drive the pile."""
    if cure is None:
        return None
    return {
        "cushion": cushion_document(cure.stack.pile) if cure.stack else None,
        "ram_mass_kg": number(cure.ram_mass),
        "ram_within_limits": cure.ram_within if cure.ram_mass else None,
        "set_within_limits_mm": number(cure.set_within, 1e3),
        "stroke_within_limits_m": number(cure.stroke_within),
    }


def blows_per_25cm(set_: float) -> float | None:
    """Return the blow count; None where the pile does not move."""
    return 0.25 / set_ if set_ > 0 else None


def option_document(option: Option, job: Job, units: Units, place: int | None) -> dict[str, object]:
    """Return an option of a ranking, or the nearest miss of a hammer that fails."""
    plan = option.failing or option.target
    taken = option.slowest.taken if option.slowest and option.drives else None
    return {
        "rank": place,
        "hammer": option.hammer.name,
        "verdict": option.verdict,
        "governs": option.governs,
        "reason": reason(option, job, units),
        "misfits": [
            {"what": misfit.what, "reason": misfit_text(misfit, units)} for misfit in option.misfits
        ],
        "cushion": cushion_document(option.stack.pile),
        "hammer_cushion": hammer_cushion(option),
        "stroke_m": number(plan.stroke),
        "energy_set_kJ": number(plan.energy_set, 1e-3),
        "stroke_window_m": None if plan.top is None else [plan.low, plan.top],
        "schedule": (
            [] if option.misfits else [_stage_document(stage_plan) for stage_plan in option.plans]
        ),
        "set_mm": number(plan.set, 1e3),
        "blows_per_25cm": blows_per_25cm(plan.set),
        "blow_energy_kJ": number(plan.blow_energy, 1e-3),
        "transferred_energy_kJ": number(plan.transferred, 1e-3),
        "peak_compression_MPa": peak((p.compression for p in option.plans), job),
        "compression_use": number(option.compression_use),
        "peak_tension_MPa": peak((p.tension for p in option.plans), job),
        "tension_use": number(option.tension_use),
        "blow_rate_per_min": number(plan.blow_rate, 60),
        "blows_total": number(taken.blows) if taken else None,
        "drive_minutes": number(taken.seconds, 1 / 60) if taken else None,
        "drive_blow_energy_MJ": number(taken.energy, 1e-6) if taken else None,
        "cost": bill_document(option.bill, job.cost),
        "runner_up": (
            None
            if option.runner_up is None
            else option_document(option.runner_up, job, units, None)
        ),
        "certificate": option.certificate or None,
        "analyses": option.analyses,
        "reach_ratio": number(option.reach),
        "reach_is_open": option.reach_is_open,
        "cure": cure_document(option.cure),
        "odds": odds_document(option.odds),
    }


def _stage_document(plan: StagePlan) -> dict[str, object]:
    return {
        "stage": plan.stage.name,
        "case": plan.stage.case or None,
        "penetration_m": plan.stage.penetration,
        "verdict": plan.verdict,
        "stroke_m": number(plan.stroke),
        "energy_set_kJ": number(plan.energy_set, 1e-3),
        "stroke_window_m": None if plan.top is None else [plan.low, plan.top],
        "set_needed_mm": 1e3 * plan.stage.set_needed,
        "set_mm": number(plan.set, 1e3),
        "blows_per_25cm": blows_per_25cm(plan.set),
        "compression_use": number(plan.compression_use),
        "tension_use": number(plan.tension_use),
    }


def ranking_document(ranking: Ranking, units: Units) -> dict[str, Any]:
    """Return the ranking as the JSON document."""
    job = ranking.job
    return {
        "schema_version": SCHEMA_VERSION,
        "title": job.title,
        "objective": job.search.objective,
        "limits": limits_document(job),
        "options": [
            option_document(option, job, units, place)
            | {"unbeaten": not is_beaten(option, ranking.options)}
            for place, option in enumerate(ranking.options, 1)
        ],
        "rejected": [option_document(option, job, units, None) for option in ranking.rejected],
        "notices": list(job.notices),
        "analyses": ranking.analyses,
        "runtime_s": ranking.runtime,
    }


def check_document(ranking: Ranking, units: Units) -> dict[str, Any]:
    """Return the answer for one hammer as the JSON document."""
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    place = 1 if option.drives else None
    return {
        "schema_version": SCHEMA_VERSION,
        "title": job.title,
        "can": option.drives,
        "limits": limits_document(job),
        **option_document(option, job, units, place),
        "notices": list(job.notices),
        "analyses": ranking.analyses,
        "runtime_s": ranking.runtime,
    }


def blow_document(blow: Blow, traces: bool = False) -> dict[str, Any]:
    """Return one blow; with `traces` also the envelope along the pile and the time histories."""
    document: dict[str, object] = {
        "schema_version": SCHEMA_VERSION,
        "hammer": blow.hammer.name,
        "stage": blow.stage.name,
        "case": blow.stage.case or None,
        "cushion": cushion_document(blow.cushion),
        "hammer_cushion": blow.hammer_cushion,
        "wear": blow.wear if blow.cushion else None,
        "stroke_m": blow.stroke,
        "energy_set_kJ": energy_set(blow.hammer, blow.stroke),
        "impact_velocity_m_s": blow.impact_velocity,
        "blow_energy_kJ": blow.blow_energy / 1e3,
        "transferred_energy_kJ": blow.transferred / 1e3,
        "set_mm": 1e3 * blow.set,
        "set_rule": blow.set_rule,
        "set_needed_mm": 1e3 * blow.stage.set_needed,
        "blows_per_25cm": blows_per_25cm(blow.set),
        "toe_displacement_max_mm": 1e3 * blow.toe_most,
        "peak_compression_MPa": blow.compression / 1e6,
        "peak_compression_at_m": blow.compression_at,
        "peak_compression_in": blow.compression_in or None,
        "peak_tension_MPa": blow.tension / 1e6,
        "peak_tension_at_m": blow.tension_at,
        "peak_tension_in": blow.tension_in or None,
        "compression_use": blow.compression_use,
        "tension_use": blow.tension_use,
        "head_force_peak_kN": blow.head_force / 1e3,
        "ram_rebound_velocity_m_s": -blow.ram_velocity,
        "energy_balance_error": blow.balance,
        "duration_ms": 1e3 * blow.duration,
        "segments": blow.segments,
        "time_step_us": 1e6 * blow.time_step,
    }
    if traces:
        envelope, trace = blow.envelope, blow.trace
        document["envelope"] = [
            {
                "distance_m": x,
                "compression_MPa": c / 1e6,
                "tension_MPa": t / 1e6,
                "compression_use": cu,
                "tension_use": tu,
            }
            for x, c, t, cu, tu in zip(
                envelope.distance.tolist(),
                envelope.compression.tolist(),
                envelope.tension.tolist(),
                envelope.compression_use.tolist(),
                envelope.tension_use.tolist(),
                strict=True,
            )
        ]
        document["trace"] = {
            "time_ms": (1e3 * trace.time).tolist(),
            "head_force_kN": (trace.head_force / 1e3).tolist(),
            "head_velocity_m_s": trace.head_velocity.tolist(),
            "toe_displacement_mm": (1e3 * trace.toe_displacement).tolist(),
        }
    return document
