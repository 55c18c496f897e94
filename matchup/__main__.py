"""Run the command line with ``python -m matchup``."""

from matchup.cli.main import run

run()
