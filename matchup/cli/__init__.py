"""The command line: the only part of matchup that prints."""
