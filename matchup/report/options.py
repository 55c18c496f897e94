"""Options and their plans as tables."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

from matchup.report.doubted import works_column
from matchup.report.sentences import needed_set, where
from matchup.report.shown import OfLimit, Units, percent, share_text
from matchup.report.table import AtLeast, Column, Field, Row, Table, tabled
from matchup.search.option import GOES_DOWN, REDUCED, Option, Ranking, StagePlan

VERDICT = Column(
    "verdict",
    "verdict",
    wrap=11,
    short={REDUCED: "drives*"},
    notes={REDUCED: "* at an earlier stage with less stroke than at the target"},
)
GOVERNS = Column(
    "governs",
    "governs",
    keep=3,
    short={"stroke range": "range", "compression": "compr."},
    notes={"stroke range": "range: the stroke is at an end of the hammer's own range"},
)


def options_table(options: Sequence[Option], units: Units, objective: str = "energy") -> Table:
    """Return the table of options, best first."""
    fields: list[Field[Option]] = [
        (VERDICT, lambda o: o.verdict),
        (Column("hammer", "hammer", wrap=14), lambda o: o.hammer.name),
    ]
    if any(option.cases for option in options):
        fields += [
            (Column("minutes", "min", 0), lambda o: _whole(o, "seconds", 1 / 60)),
            (Column("blows", "blows", 0), lambda o: _whole(o, "blows")),
        ]
    elif objective == "time":
        speed = Column(units.speed_key, f"speed\n{units.speed_unit}", 2)
        fields.append((speed, lambda o: units.speed(o.target.speed)))
    fields += [
        *setting_columns(_target_of, [option.target for option in options], units),
        (Column("cushion", "pile\ncushion", wrap=12), lambda o: units.cushion(o.stack.pile)),
    ]
    if any(option.stack.hammer for option in options):
        cushion = Column("hammer_cushion", "hammer\ncushion", wrap=12)
        fields.append((cushion, lambda o: _hammer_cushion(o, units)))
    fields += [
        measured("set", "set", "set", units, lambda o: o.target.set),
        (blow_count(units), lambda o: units.blow_count(o.target.set)),
        measured("blow_energy", "energy", "energy", units, lambda o: o.target.blow_energy),
        (
            Column("compression_percent", "compr.\n% of\nlimit", 0),
            lambda o: percent(o.compression_use),
        ),
        (Column("tension_percent", "tension\n% of\nlimit", 0), lambda o: percent(o.tension_use)),
        (GOVERNS, lambda o: o.governs),
        *_where(options, units),
        *([works_column()] if any(option.odds for option in options) else []),
        (_window(units, keep=2), lambda o: _range(o.target, units)),
        (Column("reach", "reach", 2, keep=4), _reach),
        (Column("blows_per_minute", "blows\n/min", 0, keep=1), lambda o: _rate(o.target)),
    ]
    return tabled(options, fields)


def _whole(option: Option, what: str, scale: float = 1.0) -> float | None:
    """Return blows or seconds of the whole drive, in the required case that takes the most."""
    taken = None if option.slowest is None or not option.drives else option.slowest.taken
    value = None if taken is None else getattr(taken, what)
    return None if value is None else scale * value


def _where(options: Sequence[Option], units: Units) -> list[Field[Option]]:
    """Return, for whole drives, the station and case with the largest use of a stress limit."""
    if not any(option.cases for option in options):
        return []
    text = Column("most_stressed", "most stress at", keep=3)

    def shown(option: Option) -> str | None:
        plan = option.tightest
        if plan is None:
            return None
        return f"{units.depth(plan.stage.penetration)}, {plan.stage.case}"

    return [(text, shown)]


def schedule_table(options: Sequence[Option], units: Units) -> Table:
    """Return what options do at every stage."""
    fields: list[Field[tuple[Option, StagePlan]]] = [
        (Column("hammer", "hammer", wrap=14, once=True), lambda row: row[0].hammer.name),
        (Column("stage", "stage", wrap=18), lambda row: row[1].stage.name),
        measured(
            "penetration",
            "penetration",
            "length",
            units,
            lambda row: row[1].stage.penetration,
            keep=1,
        ),
        *setting_columns(_plan_of, [plan for option in options for plan in option.plans], units),
        (_window(units), lambda row: _range(row[1], units)),
        measured("set", "set", "set", units, lambda row: row[1].set),
        measured("set_needed", "needed", "set", units, lambda row: row[1].stage.set_needed),
        (blow_count(units), lambda row: units.blow_count(row[1].set)),
        *stress_shares(_plan_of),
    ]
    return tabled([(option, plan) for option in options for plan in option.plans], fields)


def _target_of(option: Option) -> StagePlan:
    return option.target


def _plan_of(row: tuple[Option, StagePlan]) -> StagePlan:
    return row[1]


def measured(
    key: str,
    header: str,
    quantity: str,
    units: Units,
    of: Callable[[Row], float | None],
    keep: int = 9,
) -> Field[Row]:
    """Return a column of values of one quantity, with the usual decimals."""
    column = Column(
        units.key(key, quantity),
        f"{header}\n{units.unit(quantity)}",
        units.digits(quantity),
        keep=keep,
    )
    return column, lambda row: units.value(of(row), quantity)


def setting_columns(
    of: Callable[[Row], StagePlan], plans: Sequence[StagePlan], units: Units
) -> list[Field[Row]]:
    """Return the column of strokes, and of settings where some are energies."""

    def stroke(row: Row) -> float:
        return of(row).stroke

    def energy(row: Row) -> float | None:
        return of(row).energy_set

    strokes = measured("stroke", "stroke", "stroke", units, stroke)
    if all(plan.energy_set is None for plan in plans):
        return [strokes]
    return [measured("energy_set", "set at", "energy", units, energy), strokes]


def stress_shares(of: Callable[[Row], StagePlan]) -> tuple[Field[Row], Field[Row]]:
    """Return the columns of both stresses as shares of their limits."""
    return (
        (
            Column("compression_percent", "compr.\n% limit", 0),
            lambda row: _percent(of(row), of(row).compression_use),
        ),
        (
            Column("tension_percent", "tension\n% limit", 0),
            lambda row: _percent(of(row), of(row).tension_use),
        ),
    )


def _percent(plan: StagePlan, use: float) -> OfLimit | None:
    return None if plan.verdict == GOES_DOWN else percent(use)


def blow_count(units: Units) -> Column:
    """Return the column of blows per 25 cm or per foot."""
    counted = units.counted
    return Column(f"blows_per_{counted.replace(' ', '')}", f"blows\n/{counted}", 0)


def _window(units: Units, keep: int = 9) -> Column:
    return Column("stroke_window", f"window\n{units.unit('stroke')}", keep=keep)


def _hammer_cushion(option: Option, units: Units) -> str | None:
    return None if option.stack.hammer is None else units.retold(option.stack.hammer.text)


def _range(plan: StagePlan, units: Units) -> str | None:
    low, high = units.value(plan.low, "stroke"), units.value(plan.top, "stroke")
    return None if low is None or high is None else f"{low:.2f}-{high:.2f}"


def _reach(option: Option) -> float | None:
    if option.reach is None or not option.reach_is_open:
        return option.reach
    return AtLeast(option.reach)


def _rate(plan: StagePlan) -> float | None:
    return None if plan.blow_rate is None else 60 * plan.blow_rate


def margins_table(option: Option, ranking: Ranking, units: Units) -> Table:
    """Return how far an option is from each limit; a negative margin is an excess."""
    job = ranking.job
    plan = option.failing or option.target
    needed = needed_set(plan.stage, job)
    reached, asked = units.together(plan.set, needed, "set")
    what = "set" if len(job.stages) == 1 else f"set {where(plan.stage, job, units)}"
    rows: list[tuple[object, ...]] = [
        (what, reached, f"at least {asked}", 100 * (plan.set / needed - 1))
    ]
    keep = 1 - job.search.reserve
    for name, found, limit in (
        ("compression", max(p.compression for p in option.plans), keep * job.limits.compression),
        ("tension", max(p.tension for p in option.plans), keep * job.limits.tension),
    ):
        if math.isfinite(found):
            peak, most = units.together(found, limit, "stress")
            if job.limits.differ:
                # Stresses of parts with limits of their own compare by their use alone.
                peak, most = f"{share_text(keep * found / limit)} of its limit", share_text(keep)
            rows.append((f"peak {name}", peak, f"at most {most}", 100 * (1 - found / limit)))
    if option.reach is not None:
        reach = f"{option.reach:.2f}{'+' if option.reach_is_open else ''}"
        rows.append(("reach", reach, "at least 1.00", 100 * (option.reach - 1)))
    columns = (
        Column("what", "what"),
        Column("found", "found"),
        Column("needed", "needed"),
        Column("margin_percent", "margin\n%", 1),
    )
    return Table(columns, tuple(rows))
