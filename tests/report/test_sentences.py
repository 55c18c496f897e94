"""What is said, case by case; figures are chosen, so that each sentence can be read off."""

from __future__ import annotations

from dataclasses import replace

import pytest

from matchup.model.limits import Limit, PartLimits, StressLimits
from matchup.report.page import page_text
from matchup.report.ranked import check_page, ranking_page
from matchup.report.sentences import basis, reason, searched, softer_sentence, verdict_sentence
from matchup.report.shown import Units
from matchup.search.option import (
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REDUCED,
    REFUSES,
    Cure,
)
from tests import jobs
from tests.report.plans import STAGE, option, plan, ranking, running, sheets

METRIC, US = Units("metric"), Units("us")
LIMITS = StressLimits((PartLimits("", Limit(1e8, "a rule"), Limit(1e8, "a rule")),))
JOB = jobs.small_job(limits=LIMITS)
EARLY = replace(jobs.SOFT, name="soft clay")
STAGED = replace(JOB, stages=(EARLY, STAGE))
RESERVED = jobs.small_job(limits=LIMITS, reserve=0.1)
WEAK = plan(1.2, 3.1, 0.5, 1.03, verdict=NOT_REACHED)
"""Full stroke of a hammer of 1.2 m."""


# --- the answer ----------------------------------------------------------------------------------


def test_the_best_of_several_is_named_with_its_energy():
    said = verdict_sentence(ranking([option()], [option(WEAK, verdict=NOT_REACHED)]), METRIC)
    assert said == (
        "1 of 2 hammers can drive this pile within the limits; least energy: Curlew at 0.50 m on 4 "
        "sheets of oak, 50.0 kJ a blow."
    )


def test_the_fastest_is_named_with_its_speed():
    job = jobs.small_job(objective="time")
    assert verdict_sentence(ranking([option()], job=job), METRIC) == (
        "the hammer can drive this pile within the limits; fastest: Curlew at 0.50 m on 4 sheets "
        "of oak, 0.13 m/min."
    )
    unknown = option(plan(blow_rate=None))
    assert "its blow rate not known" in verdict_sentence(ranking([unknown], job=job), METRIC)


@pytest.mark.parametrize(
    ("verdict", "why"),
    [
        (NOT_REACHED, "it does not reach the set"),
        (REFUSES, "it refuses"),
        (OVER_TENSION, "it overstresses in tension"),
        (OVER_COMPRESSION, "it overstresses in compression"),
        (PILE_RUNS, "pile runs"),
    ],
)
def test_one_failing_hammer_is_said_to_fail_and_why(verdict, why):
    failing = option(replace(WEAK, verdict=verdict), verdict=verdict)
    said = verdict_sentence(ranking([], [failing]), METRIC)
    assert said == f"Curlew can't drive this pile within the limits: {why}."
    both = verdict_sentence(ranking([], [failing, failing]), METRIC)
    assert both == (
        "none of the 2 hammers can drive this pile within the limits; the nearest is Curlew: "
        f"{why}."
    )


def test_what_could_not_be_analysed_is_not_said_to_fail():
    unknown = option(plan(verdict=NOT_ANALYSED, why="a reason"), verdict=NOT_ANALYSED)
    assert verdict_sentence(ranking([], [unknown]), METRIC) == "Curlew could not be analysed."
    assert verdict_sentence(ranking([], [unknown] * 3), METRIC) == "none of 3 could be analysed."
    assert reason(unknown, JOB, METRIC) == "a reason on 4 sheets of oak"


# --- reasons -------------------------------------------------------------------------------------


def test_a_driving_option_tells_the_worst_uses_of_all_stages():
    easy = plan(0.3, 12.0, 0.2, 0.91, EARLY)
    said = reason(option(easy, plan(0.5, 4.2, 0.5, 0.6)), STAGED, METRIC)
    assert said == (
        "at stage 'final set', 0.50 m on 4 sheets of oak gives a set of 4.2 mm (4.0 mm needed); "
        "compression is at 50% and tension at 91% of the limit"
    )


def test_a_reduced_stroke_is_told_by_stage():
    held = replace(plan(0.3, 12.0, 0.2, 0.91, EARLY), top=0.3)
    said = reason(option(held, plan(0.5), verdict=REDUCED), STAGED, METRIC)
    assert said.endswith("; stroke kept to 0.30 m at 'soft clay'")


def test_a_weak_hammer_is_told_at_full_stroke():
    assert reason(option(WEAK, verdict=NOT_REACHED), JOB, METRIC) == (
        "full stroke of 1.20 m on 4 sheets of oak gives a set of 3.1 mm of the 4.0 mm needed; "
        "compression is at 50% and tension at 103% of the limit"
    )


def test_a_set_hardly_missed_does_not_look_reached():
    near = replace(WEAK, set=3.98e-3)
    assert "3.98 mm of the 4.00 mm needed" in reason(option(near, verdict=NOT_REACHED), JOB, METRIC)


OVER = plan(0.5, 4.2, 0.5, 1.2, verdict=OVER_TENSION)


@pytest.mark.parametrize(
    ("hammer", "said"),
    [
        (
            jobs.hydraulic(5.0),
            "the lowest step that reaches the set, 0.50 m on 4 sheets of oak, gives a set of "
            "4.2 mm (4.0 mm needed)",
        ),
        (
            jobs.hydraulic(5.0, stroke_min=0.5),
            "already its lowest stroke of 0.50 m on 4 sheets of oak gives a set of 4.2 mm (4.0 mm "
            "needed)",
        ),
        (
            jobs.hydraulic(5.0, 0.5, stroke_min=0.5, stroke_step=None),
            "its only stroke of 0.50 m on 4 sheets of oak gives a set of 4.2 mm (4.0 mm needed)",
        ),
        (
            jobs.drop(5.0),
            "a set of 4.0 mm needs a stroke of 0.50 m on 4 sheets of oak",
        ),
    ],
)
def test_an_overstressing_stroke_is_told_as_what_it_is(hammer, said):
    failing = option(OVER, verdict=OVER_TENSION, hammer=hammer)
    assert reason(failing, JOB, METRIC) == (
        f"{said}; compression is at 50% and tension at 120% of the limit"
    )


def test_a_running_pile_is_told_by_its_weight():
    said = reason(option(running(EARLY), verdict=PILE_RUNS), STAGED, METRIC)
    assert said == (
        "at stage 'soft clay', pile, helmet, ram and what stands on it weigh more than the 180 kN "
        "of resistance"
    )


def test_hammer_cushions_stand_in_the_sentence_where_there_is_a_choice():
    both = option(stack=sheets(4, jobs.SOFT_BLOCK))
    alone = option(stack=replace(sheets(4, jobs.SOFT_BLOCK), pile=None))
    assert "0.50 m on 4 sheets of oak under soft block gives" in reason(both, JOB, METRIC)
    assert "0.50 m under soft block gives" in reason(alone, JOB, METRIC)


# --- cures ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("verdict", "cure", "said"),
    [
        (
            NOT_REACHED,
            Cure(ram_looked=True, ram_mass=6e3, ram_within=True),
            "a ram of 6000 kg in place of 5000 kg would reach it",
        ),
        (
            NOT_REACHED,
            Cure(ram_looked=True, ram_mass=6e3),
            "a ram of 6000 kg in place of 5000 kg would reach it, though not within the stress "
            "limits",
        ),
        (REFUSES, Cure(ram_looked=True), "no ram up to 8 times as heavy would reach it"),
        (
            OVER_TENSION,
            Cure(stack=sheets(21), stack_looked=True, set_within=2.3e-3, stroke_within=0.4),
            "within the limits it reaches a set of 2.3 mm, at 0.40 m; 21 sheets of oak, more than "
            "allowed, would do",
        ),
        (
            OVER_TENSION,
            Cure(stack_looked=True, ram_looked=True, ram_mass=6e3, ram_within=True),
            "no cushion up to 2 times the thickest allowed helps; a ram of 6000 kg in place of "
            "5000 kg would do, at a lower stroke",
        ),
        (OVER_COMPRESSION, Cure(ram_looked=True), "no ram up to 8 times as heavy helps"),
    ],
)
def test_what_would_help(verdict, cure, said):
    failing = option(replace(OVER, verdict=verdict), verdict=verdict, cure=cure)
    assert reason(failing, JOB, METRIC).endswith(f"of the limit; {said}")


# --- reserve -------------------------------------------------------------------------------------


def test_a_reserve_is_told_and_sentences_compare_with_what_it_leaves():
    (line,) = [line for line in basis(RESERVED, METRIC) if line.startswith("Reserve")]
    assert line == (
        "Reserve: 10% kept back from set and limits: the set must be 1.1 times the one needed, "
        "stresses at most 90% of the limits."
    )
    near = plan(0.5, 4.2, 0.5, 0.93, verdict=NOT_REACHED)
    assert reason(option(near, verdict=NOT_REACHED), RESERVED, METRIC).endswith(
        "a set of 4.2 mm of the 4.4 mm needed with the reserve; compression is at 50% and tension "
        "at 93% of the limit, where the reserve leaves 90%"
    )


def test_margins_are_measured_from_what_the_reserve_leaves():
    near = plan(0.5, 4.2, 0.5, 0.93, verdict=NOT_REACHED)
    failing = option(near, verdict=NOT_REACHED)
    text = page_text(check_page(ranking([], [failing], RESERVED), METRIC), 100)
    assert "set              4.2 mm   at least 4.4 mm    -4.5" in text
    assert "peak tension     93.0 MPa at most 90.0 MPa   -3.3" in text


def test_without_a_reserve_there_is_no_word_of_it():
    assert "eserve" not in page_text(ranking_page(ranking([option()], job=JOB), METRIC), 100)


# --- runner-up -----------------------------------------------------------------------------------


def softer(stroke: float = 0.5, set_mm: float = 4.2) -> object:
    return option(plan(stroke, set_mm, 0.42, 0.6), stack=sheets(7))


def test_a_softer_cushion_is_told_by_what_it_gains():
    best = option(runner_up=softer())
    assert softer_sentence(best, "energy", METRIC) == (
        "Softer for Curlew: 7 sheets of oak at 0.50 m; compression from 50% to 42% of the limit, "
        "at the same energy."
    )


def test_what_a_softer_cushion_costs_is_told_in_what_is_sought():
    best = option(runner_up=softer(0.52))
    assert softer_sentence(best, "energy", METRIC).endswith("of the limit, for 4% more energy.")
    slower = option(runner_up=softer(0.5, 4.2 * 0.97))
    assert softer_sentence(slower, "time", METRIC).endswith("of the limit, for 3% less speed.")
    assert softer_sentence(option(runner_up=softer()), "time", METRIC).endswith("the same speed.")
    unknown = option(plan(blow_rate=None), runner_up=softer())
    assert softer_sentence(unknown, "time", METRIC).endswith("at a speed not known.")
    assert softer_sentence(option(), "energy", METRIC) == ""


# --- how it was found ----------------------------------------------------------------------------


def test_one_kind_of_search_is_told_once():
    assert searched(ranking([option()], [option(WEAK, verdict=NOT_REACHED)])) == (
        "Searched: all 8 cushions (exact); 120 blows in 0.2 s."
    )


def test_hammers_found_in_different_ways_are_told_apart():
    found = [
        option(certificate=f"search: {told} of 170 cushions, best found after {after}")
        for told, after in ((52, 9), (61, 40), (55, 9))
    ]
    heavy = option(running(STAGE), verdict=PILE_RUNS, certificate="exact: by weight")
    assert searched(ranking(found, [heavy])) == (
        "Searched: 3 hammers: 52 to 61 of 170 cushions, best found after 9 to 40; 1 hammer: by "
        "weight (exact); 120 blows in 0.2 s."
    )


def test_no_blow_is_counted_where_weight_decides():
    heavy = option(running(STAGE), verdict=PILE_RUNS)
    assert searched(ranking([], [heavy], analyses=0)).endswith(
        "no blow was needed, the weight decides."
    )


# --- what it rests on ----------------------------------------------------------------------------


def test_defaults_are_told_with_their_stages_where_they_differ():
    noted = replace(
        STAGED,
        stages=(
            replace(EARLY, notes=("toe quake 6.7 mm (a source)", "toe damping 0.5 s/m (another)")),
            replace(STAGE, notes=("toe damping 0.5 s/m (another)",)),
        ),
    )
    assert basis(noted, METRIC)[-1] == (
        "Taken by default: toe quake 6.7 mm (a source) at 'soft clay'; toe damping 0.5 s/m "
        "(another)."
    )
    assert "toe quake 0.264 in (a source)" in basis(noted, US)[-1]


def test_warnings_and_notices_are_told():
    warned = replace(
        JOB,
        limits=StressLimits((LIMITS.parts[0]._replace(warnings=("it is high",)),)),
        notices=("a thing.",),
    )
    assert basis(warned, METRIC)[1:] == ["Warning: it is high.", "Notice: a thing."]


def test_us_sentences_hold_no_metric_unit():
    failing = option(
        OVER,
        verdict=OVER_TENSION,
        cure=Cure(set_within=2e-3, stroke_within=0.4, ram_looked=True, ram_mass=6e3),
    )
    said = reason(failing, JOB, US)
    words = said.replace(";", " ").replace(",", " ").replace("(", " ").replace(")", " ").split()
    assert not {"m", "mm", "kg", "kN", "kJ", "MPa"} & set(words)
    assert {"ft", "in", "lb"} <= set(words)
