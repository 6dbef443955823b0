"""Reads a plan folder into the model, or names every fault of all its files with its place."""
