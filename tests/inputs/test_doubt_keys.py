"""The job file's ``[doubt]``: what it says, and every problem with line, place and what to do."""

from __future__ import annotations

import math

import pytest

from matchup.model.doubt import Correlation, Lognormal, Percentiles, Triangular, Uniform
from tests.inputs.written import JOB, line_in

DOUBT = """\
[doubt]
shaft = { lognormal = { mean = 1.1, cov = 0.2 } }
toe = [
  { triangular = { low = 0.8, high = 1.3 }, to = "15 m" },
  { low = 0.7, best = 1.0, high = 1.5, from = "15 m", name = "deep toe" },
]
efficiency = { uniform = { low = 0.9, high = 1 } }
correlations = [["shaft", "deep toe", 0.4], ["efficiency", "shaft", -0.1]]
samples = 500
standard_error = 0.02
strokes = "keep"
"""
PLAIN = "{ uniform = { low = 0.5, high = 2.0 } }"


def test_what_a_job_says_of_its_doubt(desk):
    doubt = desk.load(JOB + DOUBT).doubt
    assert [one.of for one in doubt.inputs] == ["shaft", "toe", "toe", "efficiency"]
    assert [one.name for one in doubt.inputs] == [
        "shaft resistance",
        "toe resistance to 15 m",
        "deep toe",
        "hammer efficiency",
    ]
    assert [one.factor for one in doubt.inputs] == [
        Lognormal(1.1, 0.2),
        Triangular(0.8, 1.0, 1.3),
        Percentiles(0.7, 1.0, 1.5),
        Uniform(0.9, 1.0),
    ]
    assert [(one.top, one.bottom) for one in doubt.inputs] == [
        (0.0, math.inf),
        (0.0, 15.0),
        (15.0, math.inf),
        (0.0, math.inf),
    ]
    assert doubt.correlations == (
        Correlation("shaft resistance", "deep toe", 0.4),
        Correlation("hammer efficiency", "shaft resistance", -0.1),
    )
    assert (doubt.samples, doubt.standard_error, doubt.strokes) == (500, 0.02, "keep")


def test_a_job_without_it_has_no_doubt(desk):
    assert desk.load(JOB).doubt is None


@pytest.mark.parametrize(
    ("key", "place", "must"),
    [
        ("toe = 3", "doubt.toe", "must be a table like { lognormal"),
        ("toe_quake = [1]", "doubt.toe_quake", "must be a table of keys"),
        ("toe = {}", "doubt.toe", "must name one distribution"),
        (
            "toe = { lognormal = { cov = 0.2 }, uniform = { low = 1, high = 2 } }",
            "doubt.toe",
            "must name one distribution",
        ),
        ("toe = { lognormal = { mean = 1 } }", "doubt.toe.lognormal.cov", "must be given"),
        ("toe = { lognormal = { cov = 0 } }", "doubt.toe.lognormal.cov", "must be > 0"),
        (
            "toe = { triangular = { low = 1.2, high = 1.3 } }",
            "doubt.toe.triangular.mode",
            "must be from `low` to `high`",
        ),
        (
            "toe = { uniform = { low = 1.2, high = 0.3 } }",
            "doubt.toe.uniform.high",
            "must be above `low`",
        ),
        ("toe = { low = 0.7, best = 1.0 }", "doubt.toe.high", "must be given"),
        ("toe = { low = 0.7, best = 0.6, high = 2 }", "doubt.toe.best", "must be above `low`"),
        (
            'toe = { low = 0.7, best = 1, high = 2, shape = "triangular" }',
            "doubt.toe.best",
            "must be as far from `low` as from `high` within a factor of 1.62",
        ),
        (
            'toe = { low = 0.7, best = 1, high = 2, shape = "normal" }',
            "doubt.toe.shape",
            "must be one of: lognormal, triangular",
        ),
        (
            'toe = { uniform = { low = 0.5, high = 2 }, shape = "lognormal" }',
            "doubt.toe.shape",
            "must be left out",
        ),
        ("toe = { normal = { mean = 1 } }", "doubt.toe.normal", "must be a known key"),
        (
            f"toe = [{PLAIN}, {{ low = 1 }}]",
            "doubt.toe 2.best",
            "must be given",
        ),
        (
            'toe = { uniform = { low = 0.5, high = 2 }, from = "9 m", to = "3 m" }',
            "doubt.toe.to",
            "must be below `from`",
        ),
        (
            'toe = { uniform = { low = 0.5, high = 2 }, from = "9" }',
            "doubt.toe.from",
            "must have a unit",
        ),
        (
            'toe_quake = { uniform = { low = 0.5, high = 2 }, to = "9 m" }',
            "doubt.toe_quake.to",
            "must be left out: only of resistance, shaft, toe",
        ),
        (f"setup = {PLAIN}", "doubt.setup", "must be left out with [[stages]]"),
        (
            f'toe = {PLAIN}\ncorrelations = [["toe", "shaft", 0.5]]',
            "doubt.correlations",
            "must be between inputs of [doubt]: toe resistance",
        ),
        (f"toe = {PLAIN}\ncorrelations = [[1]]", "doubt.correlations", "must be a list of two"),
        (f"toe = {PLAIN}\nsamples = 0", "doubt.samples", "must be >= 1"),
        (f"toe = {PLAIN}\nstandard_error = 1", "doubt.standard_error", "must be above 0"),
        (f'toe = {PLAIN}\nstrokes = "fixed"', "doubt.strokes", "must be one of: adapt, keep"),
        ("samples = 10", "doubt", "must name one input or more: resistance, shaft"),
    ],
)
def test_every_problem_is_told_with_its_place(desk, key, place, must):
    problems = desk.problems(f"{JOB}[doubt]\n{key}\n")
    assert problems[0].place == place
    assert problems[0].must.startswith(must)
    assert problems[0].line > line_in(JOB, 'rule = "aashto"')


def test_a_cushion_that_is_not_there_is_in_no_doubt(desk):
    text = JOB[: JOB.index("[pile_cushion]")] + JOB[JOB.index("[[stages]]") :]
    (problem,) = desk.problems(f"{text}[doubt]\ncushion_stiffness = {PLAIN}\n")
    assert problem.place == "doubt.cushion_stiffness"
    assert "there is no [pile_cushion]" in problem.must


def test_all_problems_are_told_at_once(desk):
    text = (
        f"{JOB}[doubt]\ntoe = 3\nshaft = {{ uniform = {{ low = 2, high = 1 }} }}\nsetup = {PLAIN}\n"
    )
    places = [problem.place for problem in desk.problems(text)]
    assert places == ["doubt.toe", "doubt.shaft.uniform.high", "doubt.setup"]


def test_what_has_no_effect_is_told(desk):
    text = f'{JOB}[doubt]\ntoe = {{ uniform = {{ low = 1, high = 2 }}, from = "21.5 m" }}\n'
    (notice,) = desk.load(text).notices
    assert "doubt.toe has no effect: the pile does not get there" in notice
