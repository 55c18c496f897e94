"""Hammers that do not fit: every reason, told together, at no cost; how the others are used."""

from __future__ import annotations

import json
import math
from dataclasses import replace

import pytest

import matchup
from matchup.errors import InputError, ModelError
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.site import Site, Standing
from matchup.model.vibration import Vibration
from matchup.report.sentences import reason
from matchup.report.shown import Units
from matchup.search.fit import misfits, quiet_strokes, sort_hammers
from matchup.search.option import DOES_NOT_FIT, VERDICTS
from matchup.search.ranking import rank_hammers
from tests import jobs

HAMMER = jobs.hydraulic(6.0, hammer_mass=10e3, helmet_mass=900.0, hammer_length=5.0)
"""10.9 t with its helmet; 5.88 kJ at 0.1 m, 70.6 kJ at 1.2 m; 45 blows a minute."""
QUIET = Vibration("env 1993-5", 15.0, 8e-3, factor=0.75)


def small(site: Site | None = None, *hammers: Hammer) -> Job:
    return replace(jobs.small_job(hammers=hammers or (HAMMER,)), site=site)


def said(site: Site | None, hammer: Hammer = HAMMER) -> list[str]:
    job = small(site, hammer)
    option = (*sort_hammers(job).unfit, None)[0]
    return [] if option is None else reason(option, job, Units("metric")).split("; ")


CASES = [
    (None, {"available": False}, "its catalogue row says that it is not available"),
    (
        None,
        {"head_max": 0.3},
        "its helmet takes piles of at most 300 mm, and this one is 350 mm wide",
    ),
    (
        None,
        {"head_min": 0.4},
        "its helmet takes piles of at least 400 mm, and this one is 350 mm wide",
    ),
    (Site(capacity=10.8e3), {}, "hammer and helmet weigh 10900 kg, and the rig carries 10800 kg"),
    (
        Site(capacity_with_pile=15e3),
        {},
        "hammer, helmet and pile weigh 15016 kg, and the rig carries 15000 kg with the pile",
    ),
    (
        Site(headroom=18.9),
        {},
        "pile and hammer stand 19.0 m high, and there are 18.9 m of headroom",
    ),
    (
        Site(blow_rate_max=40 / 60),
        {"kind": "air"},
        "its blow rate of 45 1/min can't be lowered, and at most 40 1/min are allowed",
    ),
    (
        Site(vibration=replace(QUIET, limit=3e-3)),
        {},
        "its least blow of 5.9 kJ shakes the ground at 15.0 m with 3.8 mm/s, and 3.0 mm/s is "
        "allowed",
    ),
    (
        Site(vibration=Vibration("bs 5228-2", 15.0, 5e-3, soil="loose")),
        {"stroke_min": 1.5, "stroke_max": 1.8},
        "its blows of 88.3 kJ to 105.9 kJ lie outside 1.5 kJ to 85.0 kJ, where the relation can "
        "tell vibration",
    ),
]


@pytest.mark.parametrize(("site", "changed", "sentence"), CASES)
def test_every_reason_is_told_with_its_figures(site, changed, sentence):
    assert said(site, replace(HAMMER, **changed)) == [sentence]


def test_what_just_fits_fits():
    width = jobs.concrete().section.width
    site = Site(capacity=10.9e3, capacity_with_pile=10.9e3 + jobs.concrete().mass, headroom=19.0)
    assert said(site, replace(HAMMER, head_min=width, head_max=width)) == []
    assert said(Site(above_ground=9.0, headroom=14.0)) == []


def test_all_that_is_in_the_way_is_told():
    found = misfits(small(Site(capacity=1e3, headroom=10.0)), replace(HAMMER, available=False))
    assert [one.what for one in found] == ["availability", "capacity", "headroom"]


def test_what_the_catalogue_does_not_tell_is_held_against_nothing():
    untold = replace(HAMMER, hammer_mass=None, hammer_length=None)
    assert said(Site(capacity=1.0, capacity_with_pile=1.0, headroom=1.0), untold) == []


# --- standing free -------------------------------------------------------------------------------


def test_a_free_standing_pile_by_hand():
    """350 mm square, 14 m and 2 m to where it is fixed; helmet and ram, then the whole hammer."""
    pile = jobs.concrete()
    stiffness = pile.toe.modulus * 0.35**4 / 12
    euler = math.pi**2 * stiffness / (4 * 16**2)
    weight = 2400 * 0.35**2 * 9.80665 * 16
    own = weight / (7.8373 * stiffness / 16**2)
    light = (6900 * 9.80665) / euler + own
    heavy = (10900 * 9.80665) / euler + own
    between = Site(standing=Standing(2 / (light + heavy), 2.0))
    assert said(between) == []
    [told] = said(between, replace(HAMMER, rides_on_pile=True))
    assert told.startswith("standing free over 16.0 m, the pile with the hammer on it is at ")


def test_a_section_must_tell_its_second_moment():
    from matchup.model.pile import Section

    part = replace(jobs.tube().toe, section=Section.h(0.012, 0.3, 0.3))
    pile = replace(jobs.tube(), parts=(part,))
    job = jobs.steel_job(pile=pile)
    with pytest.raises(ModelError, match=r"site\.inertia"):
        replace(job, site=Site(standing=Standing(2.0, 2.0)))
    replace(job, site=Site(standing=Standing(2.0, 2.0, 1e-4)))


# --- how the others are used -----------------------------------------------------------------


def test_strokes_are_those_that_shake_no_more_than_allowed():
    """0.75 sqrt(W) / 15 <= 8 mm/s up to 25.6 kJ: 0.435 m of a ram of 6 t, so 0.4 m."""
    job = small(Site(vibration=QUIET))
    assert quiet_strokes(job, QUIET, HAMMER) == pytest.approx([0.1, 0.2, 0.3, 0.4])
    [used] = sort_hammers(job).hammers
    assert used.stroke_max == pytest.approx(0.4)
    assert sort_hammers(job).notes == (
        "strokes kept to, for vibration: hydraulic 6 t 0.10 to 0.40 m",
    )
    ranking = rank_hammers(job, 1)
    for option in (*ranking.options, *ranking.rejected):
        assert all(plan.stroke <= 0.4 + 1e-9 for plan in option.plans)


def test_the_stage_nearest_to_the_neighbour_counts():
    place = Vibration("bs 5228-2", 4.0, 20e-3, soil="loose")
    shallow = small(Site(vibration=place))
    shallow = replace(shallow, stages=(jobs.SOFT, jobs.FINAL))
    deep = replace(shallow, stages=(jobs.FINAL,))
    assert len(quiet_strokes(shallow, place, HAMMER)) < len(quiet_strokes(deep, place, HAMMER))


def test_a_stage_outside_the_relation_is_refused():
    deep = jobs.concrete(0.4, 40.0)
    job = jobs.job(
        deep, (jobs.stage("deep", 30.0, 600.0, 500.0),), cushions=jobs.space(sheets=(6,))
    )
    with pytest.raises(ModelError, match=r"1 to 27 m"):
        replace(job, site=Site(vibration=Vibration("bs 5228-2", 15.0, 5e-3, soil="loose")))


def test_a_crew_slows_the_hammer_that_it_paces():
    [used] = sort_hammers(small(Site(blow_rate_max=30 / 60))).hammers
    assert used.blow_rate(1.0) == 30 / 60
    assert sort_hammers(small(Site(blow_rate_max=60 / 60))).hammers == (HAMMER,)


# --- in a ranking --------------------------------------------------------------------------------


def test_a_hammer_that_does_not_fit_costs_no_blow_and_changes_no_other():
    alone = rank_hammers(jobs.small_job(hammers=jobs.HAMMERS), 1)
    huge = jobs.hydraulic(30.0, available=False)
    beside = rank_hammers(jobs.small_job(hammers=(huge, *jobs.HAMMERS)), 1)
    assert beside.analyses == alone.analyses
    assert beside.options == alone.options
    assert beside.rejected[:-1] == alone.rejected
    unfit = beside.rejected[-1]
    assert (unfit.verdict, unfit.governs, unfit.analyses) == (DOES_NOT_FIT, "fit", 0)
    assert VERDICTS.index(DOES_NOT_FIT) == 1


@pytest.fixture(scope="module")
def nobody() -> Job:
    return small(Site(capacity=1e3), HAMMER, replace(HAMMER, name="other"))


def test_where_nobody_fits_no_blow_is_computed(nobody):
    result = matchup.rank(nobody)
    assert result.ranking.analyses == 0
    text = result.to_text()
    assert "none of the 2 hammers fits." in text
    assert "no blow was computed" in text
    document = json.loads(json.dumps(result.to_dict(), allow_nan=False))
    assert [one["verdict"] for one in document["rejected"]] == [DOES_NOT_FIT] * 2
    assert document["rejected"][0]["misfits"] == [
        {
            "what": "capacity",
            "reason": "hammer and helmet weigh 10900 kg, and the rig carries 1000 kg",
        }
    ]
    assert document["rejected"][0]["schedule"] == []
    assert len(result.to_frame()) == 2
    assert result.to_csv().count(DOES_NOT_FIT) == 2


def test_a_check_says_no_and_a_best_blow_is_refused(nobody):
    check = matchup.check(nobody, "other")
    assert not check.can
    assert check.to_text().startswith("No: other does not fit; hammer and helmet weigh")
    json.dumps(check.to_dict(), allow_nan=False)
    with pytest.raises(InputError, match="must fit the pile and the site"):
        matchup.blow(nobody, "other", best=True)


def test_a_window_keeps_to_the_sites_strokes():
    job = small(Site(vibration=QUIET))
    assert max(matchup.window(job).map.strokes) == pytest.approx(0.4)
    assert "strokes kept to" in matchup.window(job).to_text()


# --- hammers set by energy, raked and spliced piles ----------------------------------------------


def test_fewer_settings_keep_the_rates_that_they_had():
    falling = replace(HAMMER, stroke_step=None, blow_rate_max=1.5, blow_rate_full=0.5)
    some = falling.within(0.3, 0.8)
    for stroke in (0.3, 0.5, 0.8):
        assert some.blow_rate(stroke) == pytest.approx(falling.blow_rate(stroke))
    [slowed] = sort_hammers(small(Site(blow_rate_max=1.0), falling)).hammers
    assert [slowed.blow_rate(s) for s in (0.1, 1.2)] == [1.0, 0.5]


def test_a_raked_pile_can_not_stand_free():
    raked = replace(jobs.concrete(), rake=0.1)
    with pytest.raises(ModelError, match="raked"):
        replace(jobs.small_job(pile=raked), site=Site(standing=Standing(2.0, 2.0)))


def test_a_helmet_takes_the_head_of_a_tapered_pile():
    from matchup.model.pile import Section

    part = replace(jobs.timber().toe, section=Section.round(0.36, 0.2))
    job = jobs.timber_job(pile=replace(jobs.timber(), parts=(part,)))
    assert misfits(job, replace(HAMMER, head_min=0.36, head_max=0.36)) == ()
    assert [m.what for m in misfits(job, replace(HAMMER, head_max=0.35))] == ["helmet"]
