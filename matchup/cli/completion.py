"""``matchup completion``."""

from __future__ import annotations

from typing import Annotated, Literal

from cyclopts import Parameter


def completion(
    shell: Annotated[Literal["bash", "zsh", "fish", "powershell"], Parameter(help="Shell.")],
) -> int:
    """Print a static completion script for a shell."""
    from matchup.cli.main import app

    print(app.generate_completion(prog_name="matchup", shell=shell))
    return 0
