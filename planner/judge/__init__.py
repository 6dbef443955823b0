"""Predictions held against a rule book: findings, coverage and the verdict."""
