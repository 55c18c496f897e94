"""Results as people and scripts see them. Computes no engineering value."""
