"""The example jobs and what they give, each computed once in a test run."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import matchup

FOLDER = Path(__file__).parents[1] / "examples" / "hollowmere_landing"
NAMES = (
    "dolphin_tube",
    "fender_piles",
    "final_set",
    "guide_piles",
    "raked_tube",
    "tapered_piles",
    "three_stages",
)
DRIVES = ("dense_layer", "open_tube", "own_table", "soft_over_dense", "whole_drive")
"""Jobs with a [ground]."""


def path(name: str) -> Path:
    return FOLDER / f"{name}.toml"


@cache
def ranking(name: str) -> matchup.RankingResult:
    return matchup.rank(path(name))


@cache
def check(name: str, hammer: str) -> matchup.CheckResult:
    return matchup.check(ranking(name).job, hammer)


@cache
def window(name: str, hammer: str) -> matchup.WindowResult:
    return matchup.window(ranking(name).job, hammer)


@cache
def best_blow(name: str, hammer: str) -> matchup.BlowResult:
    return matchup.blow(ranking(name).job, hammer, best=True)
