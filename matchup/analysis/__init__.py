"""From model to results: chains, blows, windows. Knows of no optimiser."""
