"""What becomes of options under doubt: odds, what they hang on, and the samples behind them."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from matchup.model.doubt import Doubt
from matchup.model.job import Job
from matchup.report.page import Block, Headline, Prose
from matchup.report.shown import Units
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.odds import Estimate, Indices, Influence, Influences, Odds, Spread, Swing
from matchup.search.option import CAN_DRIVE, Option, Ranking

NAMED = 0.5
"""What a verdict hangs on are the inputs with at least so much of the leading one's share. [-]"""
MOST_NAMED = 3
HOW = {
    "adapt": "at every station the stroke nearest to the planned one that works in that ground, as "
    "a crew would find it; a sample fails where no stroke works",
    "keep": "planned strokes kept whatever they do; driving goes on where a stress limit breaks",
}


def doubt_blocks(ranking: Ranking, units: Units) -> list[Block]:
    """Return the odds of the options that were looked at; nothing where none was."""
    everyone = (*ranking.options, *ranking.rejected)
    looked = [option for option in everyone if option.odds is not None]
    if not looked:
        return []
    which = f", the best {len(looked)} of {len(ranking.options)}" if len(everyone) > 1 else ""
    blocks: list[Block] = [
        Headline(f"Under doubt{which}: {_finding(looked)}"),
        odds_table(looked, units),
    ]
    for option in looked:
        assert option.odds is not None
        if option.odds.influences is not None:
            who = f"{option.hammer.name}: " if len(looked) > 1 else ""
            blocks += _influence_blocks(option.odds, who, units)
    return [*blocks, Prose(tuple(_basis(ranking.job, looked)))]


def _finding(options: Sequence[Option]) -> str:
    """Return which option is the surest, or how sure a lone one is."""
    best = max(options, key=lambda option: _odds(option).works.value)
    odds = _odds(best)
    share = "all" if odds.works.value == 1 else f"{odds.works.value:.1%} of"
    works = f"works in {share} {odds.samples} samples"
    error = f"(standard error {100 * odds.works.error:.1f} points)"
    if len(options) > 1:
        return f"the surest is {best.hammer.name}, which {works} {error}."
    return f"{best.hammer.name} {works} {error}{_failures(odds)}."


def _failures(odds: Odds) -> str:
    """Return what the other samples come to, worst first."""
    told = [
        (odds.compression.value, "break the compression limit"),
        (odds.tension.value, "break the tension limit"),
        (odds.refuses.value, "meet refusal on the way"),
        (odds.short.value, "get to the target without its set"),
        *((share.value, f"end as {verdict!r}") for verdict, share in odds.others),
    ]
    words = [f"{share:.1%} {what}" for share, what in sorted(told, reverse=True) if share > 0]
    return f"; {', '.join(words)}" if words else ""


def _odds(option: Option) -> Odds:
    assert option.odds is not None
    return option.odds


# --- odds ---------------------------------------------------------------------------------------


def odds_table(options: Sequence[Option], units: Units) -> Table:
    """Return the odds of options, a row each."""
    length = units.unit("length")
    fields: list[Field[Option]] = [
        (Column("hammer", "hammer", wrap=14), lambda o: o.hammer.name),
        _share("works", "works\n%", lambda odds: odds.works),
        (
            Column("works_error_percent", "+-\n%", 1, keep=5),
            lambda o: 100 * _odds(o).works.error,
        ),
        _share("refuses", "refuses\n%", lambda odds: odds.refuses),
        _share("short_of_set", "no set\n%", lambda odds: odds.short),
        _share("over_compression", "over\ncompr.\n%", lambda odds: odds.compression),
        _share("over_tension", "over\ntension\n%", lambda odds: odds.tension),
        *_others(options),
        (
            Column(units.key("refusal_depth_p50", "length"), f"stopped\nat {length}\nP50", 1),
            lambda o: _middle(_odds(o).refusal_depth, units),
        ),
    ]
    if any(_odds(option).strokes == "keep" for option in options):
        fields.insert(3, _share("reaches", "reaches\n%", lambda odds: odds.reaches))
    if any(option.cases for option in options):
        fields += _percentiles("blows", "blows", lambda odds: odds.blows, 1.0)
        fields += _percentiles("minutes", "min", lambda odds: odds.seconds, 1 / 60)
    else:
        fields += _percentiles("stress_percent", "stress\n%", lambda odds: odds.stress_use, 100.0)
    return tabled(options, fields)


def _others(options: Sequence[Option]) -> list[Field[Option]]:
    """Return the column of what else stops samples, where anything does."""
    if not any(_odds(option).others for option in options):
        return []
    column = Column("other_percent", "other\n%", 1)
    return [(column, lambda o: 100 * sum(share.value for _, share in _odds(o).others))]


def works_column() -> Field[Option]:
    """Return the column of a table of options with the share of samples that work."""
    column = Column("works_percent", "works\n% of\nsamples", 0)
    return column, lambda o: None if o.odds is None else 100 * o.odds.works.value


def _share(key: str, header: str, of: Callable[[Odds], Estimate]) -> Field[Option]:
    return Column(f"{key}_percent", header, 1), lambda o: 100 * of(_odds(o)).value


def _percentiles(
    key: str, header: str, of: Callable[[Odds], Spread | None], scale: float
) -> list[Field[Option]]:
    """Return the columns of P10, P50 and P90."""

    def shown(option: Option, place: int) -> float | None:
        spread = of(_odds(option))
        return None if spread is None else scale * spread[place].value

    return [
        (Column(f"{key}_p10", f"{header}\nP10", 0, keep=4), lambda o: shown(o, 0)),
        (Column(f"{key}_p50", f"{header}\nP50", 0), lambda o: shown(o, 1)),
        (Column(f"{key}_p90", f"{header}\nP90", 0), lambda o: shown(o, 2)),
    ]


def _middle(spread: Spread | None, units: Units) -> float | None:
    return None if spread is None else units.value(spread.p50.value, "length")


def _basis(job: Job, options: Sequence[Option]) -> list[str]:
    """Return what was sampled, how, and how well it is known."""
    assert job.doubt is not None
    odds = _odds(options[0])
    case = f" case {odds.case}" if odds.case else ""
    lines = [
        f"Doubt, as factors on{case or ' what the job says'}: {_doubted(job.doubt)}. "
        f"Samples: {HOW[odds.strokes]}.",
        f"{odds.scramblings} independently scrambled Sobol sequences, seed {job.search.seed}; "
        "standard errors follow from the scatter between them: "
        f"{_errors([_odds(option) for option in options])}.",
    ]
    asked = job.doubt.standard_error
    missed = [o.hammer.name for o in options if asked and _odds(o).worst_error > asked]
    if missed:
        lines.append(
            f"The standard error asked for, {asked:g}, is not met by {', '.join(missed)}: more "
            f"than {odds.samples} samples are not drawn."
        )
    return lines


def _errors(odds: Sequence[Odds]) -> str:
    """Return how large the standard errors are, in words."""
    shares = max(one.share_error for one in odds)
    text = f"at most {100 * shares:.1f} points of a probability"
    if not any(one.blows for one in odds):
        return text
    drives = max(one.drive_error for one in odds)
    return (
        f"{text}, and {100 * drives:.1f}% of the median for blows and minutes, which are of the "
        "samples that reach the target"
    )


def _doubted(doubt: Doubt) -> str:
    """Return what is in doubt, in words."""
    words = [f"{one.name} {one.factor.text}" for one in doubt.inputs]
    words += [
        f"correlation of {one.first} and {one.second} {one.value:g}" for one in doubt.correlations
    ]
    return "; ".join(words)


# --- what matters -------------------------------------------------------------------------------


def _influence_blocks(odds: Odds, who: str, units: Units) -> list[Block]:
    """Return what an option hangs on."""
    found = odds.influences
    assert found is not None
    blocks: list[Block] = [
        Headline(f"{who}{hangs_on(odds)}"),
        influences_table(found),
        Headline("One input at a time at its P10 and P90, the others at their medians:"),
        swings_table(found, units),
    ]
    note = (
        f"Shares of the variance over {found.samples} drives by Saltelli's design, the inputs "
        "taken as independent: alone (first order), and with all that an input acts with (total "
        "order). Of a drive that is stopped the time down to there counts."
    )
    return [*blocks, Prose((note,))]


def hangs_on(odds: Odds, shares: bool = True) -> str:
    """Return in a sentence what verdict and time hang on, with or without shares."""
    found = odds.influences
    assert found is not None
    works, time = (
        _leading(found, of, shares) for of in (lambda one: one.works, lambda one: one.time)
    )
    if works:
        told = f"the verdict hangs on {works}"
    else:
        every = "works" if odds.works.value > 0.5 else "fails"
        told = f"the verdict is in no doubt: every one of {found.samples} drives {every}"
    told = f"{told}; the time of the drive hangs on {time}" if time else told
    return f"{told[:1].upper()}{told[1:]}."


def _leading(
    found: Influences, of: Callable[[Influence], Indices | None], with_shares: bool
) -> str:
    """Return the inputs with the largest shares of a variance, with these; empty if none has."""
    shares = [(indices.total, one.name) for one in found.inputs if (indices := of(one))]
    sure = [(share.value, name) for share, name in shares if share.value > 2 * share.error]
    if not sure:
        return "no single input for sure" if shares else ""
    most = max(sure)[0]
    named = [(value, name) for value, name in sorted(sure, reverse=True) if value >= NAMED * most]
    words = [
        f"{name} ({min(value, 1):.0%} of its variance)" if with_shares else name
        for value, name in named[:MOST_NAMED]
    ]
    return " and ".join([", ".join(words[:-1]), words[-1]] if len(words) > 1 else words)


def influences_table(found: Influences) -> Table:
    """Return the shares of variance that inputs account for."""
    fields: list[Field[Influence]] = [(Column("input", "input", wrap=34), lambda one: one.name)]
    shares: list[tuple[str, Callable[[Influence], Indices | None]]] = [
        ("verdict", lambda one: one.works),
        ("time", lambda one: one.time),
    ]
    for what, of in shares:
        if any(of(one) for one in found.inputs):
            fields += _index(f"{what}_first", f"{what}\nalone", of, 0)
            fields += _index(f"{what}_total", f"{what}\nin all", of, 1)
    return tabled(found.inputs, fields)


def _index(
    key: str, header: str, of: Callable[[Influence], Indices | None], place: int
) -> list[Field[Influence]]:
    """Return the columns of an index and its standard error."""

    def shown(one: Influence, what: int) -> float | None:
        indices = of(one)
        return None if indices is None else 100 * indices[place][what]

    return [
        (Column(f"{key}_percent", f"{header}\n%", 0), lambda one: shown(one, 0)),
        (Column(f"{key}_error_percent", "+-", 0, keep=5), lambda one: shown(one, 1)),
    ]


def swings_table(found: Influences, units: Units) -> Table:
    """Return what becomes of the option with one input at a time away from its median."""
    fields: list[Field[Influence]] = [(Column("input", "input", wrap=34), lambda one: one.name)]
    for key, header, of in (
        ("p10", "P10", lambda one: one.low),
        ("p90", "P90", lambda one: one.high),
    ):
        fields += _swing(key, header, of, units, found.middle.blows is not None)
    return tabled(found.inputs, fields)


def _swing(
    key: str, header: str, of: Callable[[Influence], Swing], units: Units, takes_time: bool
) -> list[Field[Influence]]:
    """Return the columns of one side."""
    length = units.unit("length")
    fields: list[Field[Influence]] = [
        (Column(f"{key}_factor", f"factor\n{header}", 2), lambda one: of(one).factor),
        (Column(f"{key}_verdict", "then", wrap=16), lambda one: _told(of(one))),
        (
            Column(units.key(f"{key}_stopped_at", "length"), f"at\n{length}", 1, keep=4),
            lambda one: units.value(of(one).depth, "length"),
        ),
    ]
    if takes_time:
        fields += [
            (Column(f"{key}_blows", "blows", 0, keep=6), lambda one: of(one).blows),
            (Column(f"{key}_minutes", "min", 1, keep=6), lambda one: minutes(of(one).seconds)),
        ]
    return fields


def _told(swing: Swing) -> str:
    return "works" if swing.verdict in CAN_DRIVE else swing.verdict


def minutes(seconds: float | None) -> float | None:
    """Return seconds as minutes; None where they are not known."""
    return None if seconds is None else seconds / 60


# --- documents ----------------------------------------------------------------------------------


def odds_document(odds: Odds | None) -> dict[str, Any] | None:
    """Return the odds for the JSON document."""
    if odds is None:
        return None
    return {
        "samples": odds.samples,
        "scramblings": odds.scramblings,
        "strokes": odds.strokes,
        "case": odds.case or None,
        "works": _estimate(odds.works),
        "reaches": _estimate(odds.reaches),
        "refuses": _estimate(odds.refuses),
        "short_of_set": _estimate(odds.short),
        "over_limit": _estimate(odds.breaks),
        "over_compression": _estimate(odds.compression),
        "over_tension": _estimate(odds.tension),
        "others": {verdict: _estimate(share) for verdict, share in odds.others},
        "refusal_depth_m": _spread(odds.refusal_depth),
        "refusals": [
            {"penetration_m": depth, "probability": share} for depth, share in odds.refusals
        ],
        "blows": _spread(odds.blows),
        "minutes": _spread(odds.seconds, 1 / 60),
        "stress_use": _spread(odds.stress_use),
        "influences": _influences_document(odds.influences),
    }


def _estimate(estimate: Estimate, scale: float = 1.0) -> dict[str, float | None]:
    value, error = (scale * figure for figure in estimate)
    return {"value": value, "standard_error": error if error < float("inf") else None}


def _spread(spread: Spread | None, scale: float = 1.0) -> dict[str, Any] | None:
    if spread is None:
        return None
    return {
        name: _estimate(one, scale) for name, one in zip(("p10", "p50", "p90"), spread, strict=True)
    }


def _influences_document(found: Influences | None) -> dict[str, Any] | None:
    if found is None:
        return None
    return {
        "samples": found.samples,
        "inputs": [
            {
                "input": one.name,
                "verdict": _indices(one.works),
                "time": _indices(one.time),
                "p10": _swing_document(one.low),
                "p90": _swing_document(one.high),
            }
            for one in found.inputs
        ],
        "median": _swing_document(found.middle),
    }


def _indices(indices: Indices | None) -> dict[str, Any] | None:
    if indices is None:
        return None
    return {"first_order": _estimate(indices.first), "total_order": _estimate(indices.total)}


def _swing_document(swing: Swing) -> dict[str, Any]:
    return {
        "factor": swing.factor,
        "verdict": swing.verdict,
        "stopped_at_m": swing.depth,
        "blows": swing.blows,
        "minutes": minutes(swing.seconds),
    }
