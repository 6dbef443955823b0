"""Loops over predicting and judging: the wind gate."""
