"""Figures: what they say, that they are the same every time, and that no text breaks them."""

from __future__ import annotations

import re
from dataclasses import replace
from xml.etree import ElementTree

import numpy as np
import pytest
from matplotlib.figure import Figure

import matchup
from matchup.model.cushion import Stack
from matchup.report.figures.blow import blow_figure
from matchup.report.figures.drawing import rendered, short_name
from matchup.report.figures.margins import margins_figure
from matchup.report.figures.tradeoff import ranking_figure
from matchup.report.figures.window import window_figure
from matchup.report.shown import Units
from matchup.search.option import PILE_RUNS
from matchup.search.stroke_map import OPEN_CELL, PULLED, RUNNING, SHORT, SQUEEZED, StrokeMap
from tests import examples, jobs
from tests.report.plans import option, plan, ranking, running, sheets

METRIC, US = Units("metric"), Units("us")
WILD = (
    "<script>alert(1)</script>",
    "$x_{1",
    "A" * 300,
    "two\nlines",
    "\u202ertl\u202c",
    "hammer \N{HAMMER} \u4e2d",
    "=1+1",
)


def drawn(states: list[list[str]], name: str = "Curlew", **more: object) -> StrokeMap:
    """A map with the states given; open cells use 40 % of the compression limit."""
    shape = (len(states), len(states[0]))
    blank = np.full(shape, np.nan)
    given = {
        "job": jobs.small_job(),
        "hammer": jobs.hydraulic(5.0, name=name),
        "stage": jobs.FINAL,
        "stacks": tuple(sheets(count) for count in range(4, 4 + shape[0])),
        "strokes": 0.1 * np.arange(1, shape[1] + 1),
        "states": tuple(map(tuple, states)),
        "closed_at": (("",) * shape[1],) * shape[0],
        "sets": blank,
        "compression_uses": np.full(shape, 0.4),
        "tension_uses": blank,
        "analyses": 0,
    }
    return StrokeMap(**given | more)  # type: ignore[arg-type]


def texts(figure: Figure) -> list[str]:
    """Every text that the figure shows."""
    from matplotlib.text import Text

    return [t.get_text() for t in figure.findobj(Text) if t.get_visible() and t.get_text()]


def title(figure: Figure) -> str:
    return " ".join(figure.get_suptitle().split())


def inside(figure: Figure) -> bool:
    """Whether every title, axis label and note lies within the page."""
    figure.draw_without_rendering()
    page = figure.bbox.padded(1)
    written = [figure._suptitle]  # type: ignore[attr-defined]
    for axes in figure.axes:
        written += [axes.xaxis.label, axes.yaxis.label, *axes.texts]
        written += [axes.title, axes._left_title, axes._right_title]  # type: ignore[attr-defined]
    boxes = [text.get_window_extent() for text in written if text.get_text().strip()]
    return all(
        page.x0 <= b.x0 and b.x1 <= page.x1 and page.y0 <= b.y0 and b.y1 <= page.y1 for b in boxes
    )


def all_figures() -> dict[str, Figure]:
    final = examples.ranking("final_set")
    blow = examples.best_blow("final_set", "Avocet")
    return {
        "ranking": final.figure(),
        "margins": margins_figure(final.rejected, final.ranking, METRIC),
        "window": examples.window("final_set", "Avocet").figure(),
        "blow": blow.figure(),
    }


# --- files ---------------------------------------------------------------------------------------


def test_the_same_result_gives_the_same_bytes_whatever_the_users_own_style():
    import matplotlib

    once = {name: rendered(figure, "svg") for name, figure in all_figures().items()}
    with matplotlib.rc_context({"font.size": 30, "svg.fonttype": "none", "axes.grid": True}):
        again = {name: rendered(figure, "svg") for name, figure in all_figures().items()}
    assert once == again


@pytest.mark.parametrize("kind", ["png", "pdf"])
def test_other_kinds_are_the_same_too(kind):
    first, second = (rendered(margins_figure([option()], ranking(), METRIC), kind) for _ in "ab")
    assert first == second
    assert first.startswith({"png": b"\x89PNG", "pdf": b"%PDF"}[kind])


def test_an_svg_is_sound_undated_and_needs_no_font():
    for figure in all_figures().values():
        svg = rendered(figure, "svg")
        ElementTree.fromstring(svg)
        assert b"<dc:date>" not in svg
        assert b"<text" not in svg
        assert b"font-family" not in svg


@pytest.mark.parametrize("name", ["figure.SVG", "figure.png", "figure.pdf"])
def test_plot_writes_by_the_ending(tmp_path, name):
    examples.window("final_set", "Avocet").plot(tmp_path / name)
    start = (tmp_path / name).read_bytes()[:5]
    assert start in (b"<?xml", b"\x89PNG\r", b"%PDF-")
    assert [path.name for path in tmp_path.iterdir()] == [name]


@pytest.mark.parametrize("name", ["figure.jpg", "figure", "figure.svg.gz"])
def test_another_ending_is_a_problem(tmp_path, name):
    with pytest.raises(matchup.InputError, match=r"must end in \.svg, \.png or \.pdf"):
        examples.window("final_set", "Avocet").plot(tmp_path / name)
    assert not list(tmp_path.iterdir())


def test_a_failed_write_leaves_nothing(tmp_path, monkeypatch):
    from pathlib import Path

    def full(self: Path, target: Path) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", full)
    with pytest.raises(matchup.InputError, match="No space left"):
        examples.window("final_set", "Avocet").plot(tmp_path / "figure.svg")
    assert not list(tmp_path.iterdir())


# --- what they say -------------------------------------------------------------------------------


def test_nothing_lies_outside_the_page():
    for name, figure in all_figures().items():
        assert inside(figure), name


def test_the_window_names_every_limit_that_closes_it():
    wide = [
        [SHORT] * 8 + [OPEN_CELL] * 8 + [SQUEEZED] * 8,
        [SHORT] * 8 + [OPEN_CELL] * 8 + [SQUEEZED] * 8,
        [SHORT] * 8 + [OPEN_CELL] * 2 + [PULLED] + [OPEN_CELL] * 5 + [SQUEEZED] * 8,
    ]
    figure = window_figure(drawn(wide), METRIC)
    shown = {" ".join(text.split()) for text in texts(figure)}
    assert {
        "set not reached",
        "compression above its limit",
        "tension above its limit",
    } <= shown
    assert title(figure).startswith("Curlew at stage 'final set': it works on 3 of 3 cushions")


def test_edges_lie_between_open_cells_and_what_closes_them():
    from matchup.report.figures.window import _edges, _panels

    found = drawn([[SHORT, OPEN_CELL, SQUEEZED]])
    panel = _panels(found, METRIC)[0]
    states = np.array(found.states)
    (low,) = _edges(states == OPEN_CELL, states == SHORT, panel)
    (high,) = _edges(states == OPEN_CELL, states == SQUEEZED, panel)
    assert low[0] == pytest.approx((0.15, 0.15))
    assert high[0] == pytest.approx((0.25, 0.25))


@pytest.mark.parametrize("units", [METRIC, US])
def test_a_window_of_any_shape_is_drawn(units):
    for found in (
        drawn([[RUNNING, RUNNING]]),
        drawn([[OPEN_CELL]]),
        replace(drawn([[SHORT, OPEN_CELL]]), stacks=(Stack(None, None),)),
        replace(drawn([[SHORT, OPEN_CELL]]), stacks=(Stack(None, jobs.SOFT_BLOCK),)),
    ):
        assert rendered(window_figure(found, units), "svg")


def test_the_chosen_cell_is_marked_where_it_is_in_the_plane():
    found = drawn([[SHORT, OPEN_CELL], [SHORT, OPEN_CELL]])
    assert "chosen" in texts(window_figure(found, METRIC, (found.stacks[1], 0.2)))
    assert "chosen" not in texts(window_figure(found, METRIC, (sheets(17), 0.2)))


def test_a_ranking_marks_what_no_other_option_beats():
    cheap = option(plan(0.3), hammer=jobs.hydraulic(3.0, name="cheap"))
    soft = option(plan(0.6, tension=0.3, compression=0.3), hammer=jobs.hydraulic(5.0, name="soft"))
    poor = option(plan(0.9), hammer=jobs.hydraulic(7.0, name="poor"))
    figure = ranking_figure(ranking([cheap, soft, poor]), METRIC)
    assert title(figure) == (
        "Between cheap and soft it is a choice of energy, stress and speed; 1 more (rings) is "
        "beaten"
    )
    bold = [t.get_text() for t in figure.findobj(match=_is_bold)]
    assert {"cheap", "soft"} <= set(bold)
    assert "poor" not in bold


def _is_bold(artist: object) -> bool:
    return getattr(artist, "get_fontweight", lambda: "")() == "bold"


def test_without_blow_rates_there_is_no_panel_of_speed():
    slow = option(plan(blow_rate=None))
    other = option(plan(0.7, blow_rate=None))
    figure = ranking_figure(ranking([slow, other]), METRIC)
    assert len(figure.axes) == 1
    assert "energy and stress" in title(figure)


def test_where_no_hammer_drives_the_misses_are_drawn():
    miss = option(plan(set_mm=2.0), verdict="does not reach the set")
    stuck = option(running(jobs.FINAL), verdict=PILE_RUNS, hammer=jobs.hydraulic(9.0, name="Big"))
    figure = ranking_figure(ranking((), [miss, stuck]), METRIC)
    assert title(figure) == "Curlew comes nearest of those that can't drive this pile"
    assert PILE_RUNS in texts(figure)


def test_margins_are_those_of_the_table():
    found = option(plan(set_mm=3.0, compression=0.9, tension=0.5), verdict="does not reach the set")
    axes = margins_figure([found], ranking((), [found]), METRIC).axes[0]
    of_set = next(line for line in axes.lines if line.get_marker() == "D")
    assert of_set.get_xdata()[0] == pytest.approx(-25.0)  # 3 mm of 4 mm


def test_a_blow_says_which_limit_is_nearer():
    result = examples.best_blow("final_set", "Avocet")
    figure = result.figure()
    assert re.search(r"Avocet at 0\.40 m: a set of 4\.\d mm; \w+ is the nearer to", title(figure))
    broken = replace(result.blow, tension_use=1.2)
    figure = blow_figure(broken, result.job.pile, METRIC)
    assert "tension is above its limit, at 120%" in title(figure)


def test_the_picture_of_waves_is_the_record():
    result = examples.best_blow("final_set", "Avocet")
    waves = result.figure().axes[0]
    shown = waves.collections[0].get_array()
    force = result.blow.waves.force / 1e3
    np.testing.assert_allclose(shown, force[: shown.shape[1]].T)


# --- texts that are not ours ---------------------------------------------------------------------


@pytest.mark.filterwarnings("ignore:Glyph")
@pytest.mark.parametrize("name", WILD)
def test_no_name_breaks_a_figure(name):
    hammer = jobs.hydraulic(5.0, name=name)
    many = [option(plan(0.1 * i), hammer=hammer) for i in range(1, 4)]
    assert inside(ranking_figure(ranking(many), METRIC))
    missed = [option(plan(set_mm=2.0), verdict="does not reach the set", hammer=hammer)]
    for figure in (
        margins_figure(missed, ranking((), missed), METRIC),
        window_figure(drawn([[SHORT, OPEN_CELL, SQUEEZED]], name), METRIC),
    ):
        assert rendered(figure, "svg")


def test_long_names_are_cut_and_others_kept():
    assert short_name("Curlew") == "Curlew"
    assert short_name("two\nlines") == "two lines"
    assert len(short_name("A" * 300)) == 28
    assert short_name("A" * 300).endswith("...")
