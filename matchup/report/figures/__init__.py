"""Figures of results, drawn by matplotlib, which is imported only when a figure is asked for."""
