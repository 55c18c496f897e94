"""``matchup schema``."""

from __future__ import annotations

from matchup.cli.show import show_document


def schema() -> int:
    """Print the JSON Schema of the job file, for completion in editors."""
    from matchup.inputs.schema import job_schema

    show_document(job_schema())
    return 0
