"""A starter job with its catalogues, for a new folder."""

from __future__ import annotations

from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path


def starter_files() -> dict[str, str]:
    """Return the starter job's files, by name."""
    demo = _demo_folder()
    here = files("matchup.inputs")
    return {
        "job.toml": here.joinpath("starter.toml").read_text("utf-8"),
        "drive.toml": here.joinpath("starter_drive.toml").read_text("utf-8"),
        "layers.csv": here.joinpath("starter_layers.csv").read_text("utf-8"),
        "hammers.csv": demo.joinpath("hammers.csv").read_text("utf-8"),
        "cushions.csv": demo.joinpath("cushions.csv").read_text("utf-8"),
    }


def _demo_folder() -> Traversable:
    """Return the demo catalogues: within an installed package, or beside it in a checkout."""
    try:
        return files("matchup.demo")
    except ModuleNotFoundError:
        return Path(__file__).parents[2] / "catalogs_demo"
