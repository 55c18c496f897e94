"""Cone tests against an independent reader, and real files against what they print.

The reader is `pygef` (open source, versions 0.14 and later). Its known faults, for which the
comparison allows and which `matchup` must not share: it takes every GEF column as MPa, whatever
unit the header states; it drops the rows in which any channel is void, and with them the deepest;
it drops the rows of the pre-drilled part; it reads no AGS.

Real files are no part of the project. Where the environment variable ``MATCHUP_GROUND_FILES``
names a folder that holds them, they are read too.
"""

from __future__ import annotations

import os
from pathlib import Path

import numpy as np
import pytest

from matchup.inputs.findings import Findings
from matchup.inputs.sounding import read_sounding
from matchup.model.sounding import Sounding
from tests.inputs.ground_files import BRO, GEF, changed
from tests.invented_ground import CONE_TEST

FOLDER = os.environ.get("MATCHUP_GROUND_FILES")
real = pytest.mark.skipif(FOLDER is None, reason="MATCHUP_GROUND_FILES names no folder")
CHANNELS = {"tip": "coneResistance", "sleeve": "localFriction", "pore_pressure": "porePressureU2"}


def read(path: Path) -> Sounding:
    findings = Findings()
    sounding = read_sounding(path, findings)
    assert sounding is not None, "\n".join(map(str, findings.problems))
    return sounding


def matches_pygef(path: Path, depth: str, least: float) -> None:
    """Hold every row that the other reader keeps against ours at the same depth.

    Parameters
    ----------
    path : Path
    depth : str
        Its name for the depth that `read_sounding` takes from this file.
    least : float
        Share of our rows that it must at least have kept, so that the comparison is one.
    """
    pygef = pytest.importorskip("pygef", exc_type=ImportError)
    ours = read(path)
    theirs = pygef.read_cpt(str(path)).data
    at = theirs[depth].to_numpy()
    rows = np.searchsorted(ours.depth, at - 1e-6)
    np.testing.assert_allclose(ours.depth[rows], at, atol=1e-9)
    assert len(rows) >= least * len(ours.depth)
    for ours_name, their_name in CHANNELS.items():
        if their_name not in theirs.columns:
            continue
        expected = 1e6 * theirs[their_name].to_numpy().astype(float)
        np.testing.assert_allclose(getattr(ours, ours_name)[rows], expected, rtol=1e-12)


def test_the_example_against_pygef():
    matches_pygef(CONE_TEST, "depth", 0.99)


def test_gef_in_one_unit_against_pygef(tmp_path):
    path = tmp_path / "b7.gef"
    rows = ((";12.0;", ";0.012;"), (";15.0;", ";0.015;"), (";20.0;", ";0.020;"))
    path.write_text(changed(GEF, ("4, kPa, pore", "4, MPa, pore"), *rows))
    matches_pygef(path, "depth", 0.6)


def test_bro_against_pygef(tmp_path):
    path = tmp_path / "b7.xml"
    path.write_text(BRO)
    matches_pygef(path, "depth", 0.5)


def test_where_pygef_is_not_followed(tmp_path):
    """The unit in the header counts, and the deepest row stays."""
    pygef = pytest.importorskip("pygef", exc_type=ImportError)
    path = tmp_path / "b7.gef"
    path.write_text(GEF)
    theirs, ours = pygef.read_cpt(str(path)).data, read(path)
    assert theirs["porePressureU2"].to_list() == [12.0, 15.0, 20.0]
    np.testing.assert_array_equal(ours.pore_pressure[1:4], [12e3, 15e3, 20e3])
    assert theirs["depth"].to_list()[-1] == 1.997
    assert ours.depth[-1] == 2.496


@real
@pytest.mark.parametrize(
    ("name", "depth", "least"),
    [
        ("cpt.gef", "depth", 0.99),
        ("cpt2.gef", "penetrationLength", 0.8),  # 2 m of 10.4 m are pre-drilled
        ("cpt3.gef", "penetrationLength", 1.0),
        ("CPT000000155283.xml", "depth", 0.99),
    ],
)
def test_real_files_against_pygef(name, depth, least):
    matches_pygef(Path(str(FOLDER)) / name, depth, least)


REAL = [
    # file, rows, deepest reading: depth, qc as printed there, and whether sleeve and u2 are void
    ("cpt.gef", 1004, 20.004, 14.766e6, True, False),
    ("cpt2.gef", 1039, 10.38, 12.6132e6, False, True),
    ("cpt3.gef", 5939, 29.695, 24.45e6, False, True),
    ("CPT000000155283.xml", 305, 6.57, 10.359e6, True, True),
    ("HKZ1-CPT01.ags", 2525, 50.48, 15.484e6, True, True),
]


@real
@pytest.mark.parametrize(("name", "rows", "depth", "tip", "no_sleeve", "no_pressure"), REAL)
def test_real_files_keep_their_deepest_row(name, rows, depth, tip, no_sleeve, no_pressure):
    sounding = read(Path(str(FOLDER)) / name)
    assert len(sounding.depth) == rows
    assert sounding.depth[-1] == pytest.approx(depth, abs=1e-9)
    assert sounding.tip[-1] == pytest.approx(tip, rel=1e-12)
    assert np.isnan(sounding.sleeve[-1]) == no_sleeve
    assert np.isnan(sounding.pore_pressure[-1]) == no_pressure


@real
def test_real_ags_units_within_one_row():
    """Rows as printed: 0.06 m, 0.052 MN/m2, 0.424 kN/m2, 3.6 kN/m2; u2 of -75.4 at 50.44 m."""
    sounding = read(Path(str(FOLDER)) / "HKZ1-CPT01.ags")
    row = np.searchsorted(sounding.depth, 0.06 - 1e-6)
    found = [getattr(sounding, name)[row] for name in ("depth", *CHANNELS)]
    np.testing.assert_allclose(found, [0.06, 52e3, 424.0, 3600.0], rtol=1e-12)
    assert sounding.pore_pressure[-3] == pytest.approx(-75.4e3, rel=1e-12)
    assert sounding.area_ratio == 0.58


@real
def test_a_real_borehole_is_refused():
    findings = Findings()
    assert read_sounding(Path(str(FOLDER)) / "BHR000000336600.xml", findings) is None
    (problem,) = findings.problems
    assert problem.must == "must be a cone penetration test"
    assert problem.found == "a borehole description (BHR_GT_O)"
