"""From the readings of a cone penetration test, in any file format, to a sounding.

Everything that is the same for all formats is said once here: which depth and which cone
resistance are taken, what is done with zero drift, rows out of order and rows at the same depth,
and which values can't be.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path

import numpy as np

from matchup.errors import ModelError
from matchup.inputs.findings import Findings
from matchup.inputs.readings import Channel, Readings, counted
from matchup.model.sounding import FloatArray, Sounding
from matchup.units import format_quantity

LOWEST = {"tip": -100e3, "corrected_tip": -100e3, "sleeve": -15e3, "pore_pressure": -5e6}
"""Lowest values that a cone in order can give. Down to these, a negative cone resistance or
sleeve friction is drift of the zero reading (accuracy of class 2 of ISO 22476-1:2012; from
memory) and is set to zero; a pore pressure is that of 500 m of water drawn off. [Pa]"""
HIGHEST = {"tip": 200e6, "corrected_tip": 200e6, "sleeve": 5e6, "pore_pressure": 50e6}
"""Values beyond these are voids or in another unit than stated; no cone measures them.
Common practice, no published source. [Pa]"""
LARGEST_OVERLAP = 0.5
"""Rows that go back up by more, through depths already covered, are of another test. [m]"""
MISSING_END = 0.5
"""A note is made where readings end further than this above the stated final depth. [m]"""


def sounding_of(readings: Readings, findings: Findings) -> Sounding | None:
    """Return the sounding that readings make, or note everything that stands against it.

    * Depth corrected for inclination comes before penetration length, if it is there wherever
      the length is.
    * Depths that are all negative are taken as measured downwards.
    * Cone resistance is qc as measured; qt is taken where there is no qc, or where the file
      gives qt for every qc but no area ratio by which qc could be corrected.
    * Rows are sorted by depth; rows at the same depth become one, with each channel's mean.
      Runs of rows that overlap by more than `LARGEST_OVERLAP` are two tests, and refused.

    Parameters
    ----------
    readings : Readings
        Its notes are added to.
    findings : Findings
        Of this file alone: problems that are there already stand against the sounding too.
    """
    depth = _depth(readings, findings)
    corrected = _takes_corrected(readings)
    tip = _stress(readings, "corrected_tip" if corrected else "tip", findings)
    sleeve = _stress(readings, "sleeve", findings)
    pore_pressure = _stress(readings, "pore_pressure", findings)
    if np.isnan(tip).all() and not _has_problem_at(readings, ("tip", "corrected_tip"), findings):
        must = f"must have a cone resistance: {readings.wanted['tip']}"
        found = "voids only" if {"tip", "corrected_tip"} & set(readings.channels) else "none"
        findings.add(readings.file, None, "", must, found)
    if not findings.problems:
        _check_order(readings, depth, findings)
    if findings.problems:
        return None
    if corrected:
        readings.notes.append(
            "Cone resistance is the file's own qt, corrected for pore pressure behind the cone."
        )
    for what, values in (("sleeve friction", sleeve), ("pore pressure u2", pore_pressure)):
        if np.isnan(values).all():
            readings.notes.append(f"The file has no {what}.")
    depth, (tip, sleeve, pore_pressure) = _ordered(readings, depth, (tip, sleeve, pore_pressure))
    _note_extent(readings, depth)
    try:
        return Sounding(
            name=readings.name or Path(readings.file).stem,
            depth=depth,
            tip=tip,
            sleeve=sleeve,
            pore_pressure=pore_pressure,
            corrected=corrected,
            area_ratio=readings.value("area_ratio"),
            predrilled=readings.value("predrilled") or 0.0,
            water=readings.value("water"),
            notes=tuple(readings.notes),
        )
    except ModelError as error:
        stated = readings.stated.items()
        findings.add_model_error(
            error,
            readings.file,
            {key: value.line for key, value in stated},
            {key: value.typed for key, value in stated},
            {key: value.place for key, value in stated},
        )
        return None


def _depth(readings: Readings, findings: Findings) -> FloatArray:
    """Return depths below the surface; empty, with a problem, where there are none."""
    channels = readings.channels
    vertical, length = channels.get("depth"), channels.get("length")
    channel = vertical or length
    if vertical and length and np.any(np.isnan(vertical.values) & ~np.isnan(length.values)):
        channel = length
    if channel is None:
        keys = [key for key in ("length", "depth") if key in readings.wanted]
        must = f"must have a depth: {' or '.join(readings.wanted[key] for key in keys)}"
        findings.add(readings.file, None, "", must, "none")
        return np.empty(0)
    if "length" in readings.wanted:
        readings.notes.append(
            "Depth is the penetration length, not corrected for inclination."
            if channel is length
            else "Depth is corrected for inclination, as the file gives it."
        )
    depth = channel.values
    if np.any(depth < 0) and not np.any(depth > 0):
        readings.notes.append("Depths are negative in the file; taken as measured downwards.")
        depth = np.abs(depth)
    if not _has_problem_at(readings, ("depth", "length"), findings):
        for row in np.flatnonzero(depth < 0):
            do = "Take out the rows above the surface."
            _add(readings, channel, int(row), "must be a depth below the surface", findings, do)
        for row in np.flatnonzero(np.isnan(depth)):
            _add(readings, channel, int(row), "must not be void", findings)
    return depth


def _takes_corrected(readings: Readings) -> bool:
    measured, corrected = readings.channels.get("tip"), readings.channels.get("corrected_tip")
    if measured is None or corrected is None:
        return measured is None and corrected is not None
    there = ~np.isnan(measured.values)
    complete = bool(np.all(~np.isnan(corrected.values[there])))
    return not there.any() or (readings.value("area_ratio") is None and complete)


def _stress(readings: Readings, key: str, findings: Findings) -> FloatArray:
    """Return a channel within what a cone can measure; NaN throughout where it is not there."""
    channel = readings.channels.get(key)
    if channel is None:
        return np.full(len(readings.lines), np.nan)
    values = channel.values
    low, high = LOWEST[key], HIGHEST[key]
    lowest, highest = (format_quantity(limit, "stress", "metric") for limit in (low, high))
    for row in np.flatnonzero(values < low):
        do = "Mark voids as the format does, or correct the zero reading."
        _add(readings, channel, int(row), f"must be at least {lowest}", findings, do)
    for row in np.flatnonzero(values > high):
        do = "Check the unit, and mark voids as the format does."
        _add(readings, channel, int(row), f"must be at most {highest}", findings, do)
    if key == "pore_pressure":
        return values
    drift = values[values < 0]
    if drift.size and np.all(drift >= low):
        least = format_quantity(float(drift.min()), "stress", "metric")
        readings.notes.append(
            f"{channel.place}: {counted(drift.size, 'value')} below zero, down to {least}, set "
            "to zero."
        )
    return np.where(values < 0, 0.0, values)


def _check_order(readings: Readings, depth: FloatArray, findings: Findings) -> None:
    """Note depths that can't be of one test: too few, or covered twice."""
    distinct = len(np.unique(depth))
    if distinct < 2:
        must = "must have readings at two depths or more"
        findings.add(readings.file, None, "", must, f"{distinct}")
        return
    starts = np.flatnonzero(np.diff(depth) < 0) + 1
    runs = np.split(depth, starts)
    spans = sorted((float(run[0]), float(run[-1])) for run in runs)
    deepest = np.maximum.accumulate([bottom for _, bottom in spans])
    for (top, _), above in zip(spans[1:], deepest, strict=False):
        if top < above - LARGEST_OVERLAP and not readings.one_test:
            must = "must be one test; rows go through the same depths twice"
            found = f"{top:.2f} m to {above:.2f} m again"
            line = readings.lines[int(starts[0])]
            findings.add(readings.file, line, "", must, found, readings.which)
            return


def _ordered(
    readings: Readings, depth: FloatArray, channels: Sequence[FloatArray]
) -> tuple[FloatArray, list[FloatArray]]:
    """Return channels by increasing depth, one row to a depth."""
    if np.any(np.diff(depth) < 0):
        readings.notes.append("Rows were out of depth order and have been sorted.")
    unique, place = np.unique(depth, return_inverse=True)
    doubled = len(depth) - len(unique)
    if doubled:
        rows = counted(doubled, "row")
        readings.notes.append(f"{rows} at the depth of another; their mean is taken.")
    return unique, [_means(place, values, len(unique)) for values in channels]


def _means(place: np.ndarray, values: FloatArray, count: int) -> FloatArray:
    """Return the mean of the values at each place, voids left out; NaN where all are void."""
    there = ~np.isnan(values)
    number = np.bincount(place[there], minlength=count)
    total = np.bincount(place[there], weights=values[there], minlength=count)
    means = np.full(count, np.nan)
    np.divide(total, number, out=means, where=number > 0)
    return means


def _note_extent(readings: Readings, depth: FloatArray) -> None:
    """Note readings within the pre-drilled part, and those missing above the final depth."""
    predrilled, final = readings.value("predrilled") or 0.0, readings.value("final_depth")
    loose = int(np.count_nonzero(depth < predrilled))
    if loose:
        readings.notes.append(
            f"{counted(loose, 'reading')} above the pre-drilled depth of {predrilled:.2f} m, kept."
        )
    if final is not None and depth[-1] < final - MISSING_END:
        readings.notes.append(
            f"Readings end at {depth[-1]:.2f} m, above the stated final depth of {final:.2f} m."
        )


def _add(
    readings: Readings, channel: Channel, row: int, must: str, findings: Findings, do: str = ""
) -> None:
    found = channel.typed[row].strip()
    findings.add(readings.file, readings.lines[row], channel.place, must, found, do)


def _has_problem_at(readings: Readings, keys: Iterable[str], findings: Findings) -> bool:
    """Return whether a channel has been complained of already."""
    places = {readings.channels[key].place for key in keys if key in readings.channels}
    return any(p.file == readings.file and p.place in places for p in findings.problems)
