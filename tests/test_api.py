"""The Python face: what is accepted, what results show of themselves, how problems are told."""

from __future__ import annotations

import re
from html.parser import HTMLParser

import pandas as pd
import pytest

import matchup
from tests import examples, jobs

FINAL = examples.path("final_set")


# --- what is accepted ----------------------------------------------------------------------------


def test_a_path_a_text_and_a_job_are_the_same_job():
    job = matchup.load_job(FINAL)
    checks = [matchup.check(source, "Stork") for source in (FINAL, str(FINAL), job)]
    assert len({check.to_text().split("Searched")[0] for check in checks}) == 1


@pytest.mark.parametrize(
    ("text", "metres"), [("0.6 m", 0.6), ("60 cm", 0.6), ("2 ft", 0.6096), ("24 in", 0.6096)]
)
def test_a_stroke_may_be_a_text_with_its_unit(text, metres):
    job = examples.ranking("final_set").job
    as_text = matchup.blow(job, "curlew", text, cushion="OAK", sheets=6)
    as_number = matchup.blow(job, "Curlew", metres, cushion="oak", sheets=6)
    assert as_text.blow.stroke == pytest.approx(metres, rel=1e-12)
    assert as_text.blow.set == pytest.approx(as_number.blow.set, rel=1e-9)


def test_a_thickness_may_be_a_text_and_stands_for_sheets():
    job = examples.ranking("final_set").job
    sheets = matchup.blow(job, "Curlew", 0.6, cushion="oak", sheets=6)
    thick = matchup.blow(job, "Curlew", 0.6, cushion="oak", thickness="150 mm")
    assert thick.blow.set == pytest.approx(sheets.blow.set, rel=1e-9)


def test_the_answer_does_not_depend_on_workers():
    job = jobs.small_job()
    one, two = (matchup.rank(job, workers=n) for n in (1, 2))
    assert one.options == two.options
    assert one.rejected == two.rejected


def test_a_seed_replaces_the_jobs():
    assert matchup.rank(jobs.steel_job(), seed=11).job.search.seed == 11


def test_batches_are_told_as_they_go():
    told: list[int] = []
    result = matchup.rank(jobs.steel_job(), tell=told.append)
    assert sum(told) == result.ranking.analyses


# --- what results show ---------------------------------------------------------------------------


def test_a_ranking_shows_itself():
    result = examples.ranking("final_set")
    assert str(result) == result.to_text()
    assert result.to_text().startswith("Hollowmere landing, row B, final set: 12 of 19 hammers")
    assert "kJ a blow" in result.to_text()
    assert "ft-kip a blow" in result.to_text("us")
    assert len(result.to_csv().splitlines()) == 1 + 19
    assert result.to_csv("us").startswith("verdict,hammer,stroke_ft,cushion,set_in,blows_per_ft,")


def test_a_ranking_is_a_tidy_frame_of_fixed_units():
    metric = examples.ranking("final_set")
    frame = metric.to_frame()
    assert isinstance(frame, pd.DataFrame)
    assert len(frame) == 19
    assert list(frame.hammer[:12]) == [option.hammer.name for option in metric.options]
    assert frame["rank"].tolist()[:12] == list(range(1, 13))
    assert frame["rank"][12:].isna().all()
    assert frame.stroke_m[0] == metric.options[0].target.stroke
    assert frame.stroke_low_m[0] <= frame.stroke_m[0] <= frame.stroke_high_m[0]
    assert frame.cushion_sheets[0] == 4
    scalars = frame.map(lambda value: not isinstance(value, (dict, list, tuple)))
    assert scalars.all(axis=None)
    # The job of these is shown in US units; the frame is not.
    assert set(examples.ranking("dolphin_tube").to_frame()) == set(frame)


def test_all_cushions_are_columns_of_a_frame_even_without_any():
    bare = examples.ranking("dolphin_tube").to_frame()
    assert bare.cushion_material.isna().all()


def test_a_check_shows_itself():
    able, unable = (examples.check("final_set", name) for name in ("Curlew", "Plover"))
    assert able.can
    assert not unable.can
    assert able.to_text().startswith("Yes: Curlew drives; 0.60 m on 4 sheets of plywood gives")
    assert unable.to_text().startswith("No: Plover does not reach the set; full stroke of 1.20 m")
    assert unable.option is unable.rejected[0]
    assert able.to_csv().splitlines()[1].startswith("Curlew,final set,21.0,0.6")
    assert len(unable.to_frame()) == 1


def test_margins_of_a_check_have_the_decimals_of_their_bound():
    text = examples.check("final_set", "Stork").to_text()
    found = re.findall(r"^(?:set|peak \w+) +([\d.]+) (\w+) +at \w+ ([\d.]+) \2", text, re.M)
    assert len(found) == 3
    for value, _, bound in found:
        assert len(value.split(".")[1]) == len(bound.split(".")[1])


def test_a_window_shows_itself():
    result = examples.window("final_set", "Avocet")
    assert result.is_open
    assert "it works on 30 of 30 cushions" in str(result)
    frame = result.to_frame()
    assert len(frame) == len(result.map.stacks) * result.map.strokes.size
    assert {"cushion_material", "stroke_m", "state", "set_mm"} <= set(frame)
    assert len(result.to_csv().splitlines()) == 1 + len(frame)


def test_a_blow_shows_itself():
    result = examples.best_blow("final_set", "Avocet")
    assert str(result).startswith("Avocet at stage 'final set': stroke 0.40 m on 4 sheets of ply")
    frame = result.to_frame()
    assert list(frame) == ["time_ms", "head_force_kN", "head_velocity_m_s", "toe_displacement_mm"]
    # A trace holds means over a step: the peak is that of the parabola with the means of the three
    # steps around it.
    force = frame.head_force_kN.to_numpy()
    before, largest, after = force[force.argmax() - 1 : force.argmax() + 2]
    slope, bend = (after - before) / 2, before - 2 * largest + after
    peak = largest - bend / 24 - slope**2 / (2 * bend)
    assert peak == pytest.approx(result.blow.head_force / 1e3, rel=1e-3)
    assert len(result.to_csv().splitlines()) == 1 + len(frame)
    assert len(result.envelope_table().rows) == result.blow.segments + 1


class Words(HTMLParser):
    """Reads the words of a page, and that its tags are closed in order."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.words: list[str] = []

    def handle_starttag(self, tag, attrs):
        if tag != "br":
            self.open.append(tag)

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.words += data.split()


@pytest.mark.parametrize(
    "result",
    [
        lambda: examples.ranking("three_stages"),
        lambda: examples.check("final_set", "Plover"),
        lambda: examples.best_blow("final_set", "Avocet"),
        lambda: examples.window("final_set", "Avocet"),
    ],
    ids=["ranking", "check", "blow", "window"],
)
def test_a_notebook_sees_balanced_tags_and_the_words_of_the_text(result):
    shown = result()
    page = Words()
    page.feed(shown._repr_html_())
    assert page.open == []
    in_text = {word for word in str(shown).split() if set(word) != {"-"}}
    assert in_text <= set(page.words)
    assert "<table>" in shown._repr_html_() or isinstance(shown, matchup.WindowResult)


def test_a_notebook_escapes_names():
    job = jobs.small_job(hammers=(jobs.hydraulic(6.0, name="<script>x</script>"),))
    html = matchup.rank(job)._repr_html_()
    assert "<script>" not in html
    assert "&lt;script&gt;" in html


# --- problems ------------------------------------------------------------------------------------


def test_all_problems_of_a_selection_are_told_at_once():
    job = examples.ranking("final_set").job
    with pytest.raises(matchup.InputError) as caught:
        matchup.blow(job, "Curlow", "0.6", cushion="ok", sheets=3)
    places = [problem.place for problem in caught.value.problems]
    assert places == ["stroke", "hammer", "cushion"]
    stroke, hammer, cushion = caught.value.problems
    assert stroke.found == "0.6"
    assert "unit" in stroke.must
    assert "Curlew" in hammer.do
    assert "oak" in cushion.do


@pytest.mark.parametrize("stroke", [-1.0, 0.0, float("nan"), float("inf"), 5.0, "5 m"])
def test_a_stroke_that_cannot_be_is_a_problem(stroke):
    job = examples.ranking("final_set").job
    with pytest.raises(matchup.InputError) as caught:
        matchup.blow(job, "Curlew", stroke, cushion="oak", sheets=6)
    assert {problem.place for problem in caught.value.problems} == {"stroke"}


def test_a_hammer_that_is_not_named_is_a_problem_where_there_are_several():
    with pytest.raises(matchup.InputError, match="must be named, since there are 19"):
        matchup.check(examples.ranking("final_set").job)


def test_a_stage_is_named_among_its_own():
    with pytest.raises(matchup.InputError, match="soft clay, silty sand, final set"):
        matchup.window(examples.ranking("three_stages").job, "Curlew", "rock")


def test_a_blow_on_a_running_pile_is_an_analysis_error():
    job = examples.ranking("three_stages").job
    with pytest.raises(matchup.AnalysisError, match="the pile runs"):
        matchup.blow(job, "Albatross", 0.5, stage="soft clay", cushion="oak", sheets=6)


def test_a_file_that_is_not_there_is_a_problem():
    with pytest.raises(matchup.InputError, match=r"nowhere\.toml"):
        matchup.rank("nowhere.toml")


def test_both_kinds_of_error_are_one():
    assert issubclass(matchup.InputError, matchup.MatchupError)
    assert issubclass(matchup.AnalysisError, matchup.MatchupError)


def test_what_the_package_offers_is_there_and_nothing_else():
    assert all(hasattr(matchup, name) for name in matchup.__all__)
    assert not hasattr(matchup, "ranks")
