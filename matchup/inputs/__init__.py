"""Files to model: job files, catalogues. Units are read here; every problem is told at once."""

from __future__ import annotations

from matchup.inputs.job_file import load_job

__all__ = ["load_job"]
