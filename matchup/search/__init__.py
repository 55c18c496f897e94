"""Choosing: cushions, plans, options, the ranking."""
