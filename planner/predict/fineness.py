"""How finely the studies cut the blade and the turn."""

from __future__ import annotations

from planner.rotor.result import TrimSettings

STATIONS = 16
"""Gauss points along the lifting blade."""
SETTINGS = TrimSettings(n_azimuths=20, n_harmonics=4)
"""Against 64 points, 48 azimuths and 8 harmonics, over the sample rotors at 25 to 100 % rpm,
collective 2 to 9 degrees and wind to 9 m/s: flap within 0.011 degrees, thrust within 0.1 %, torque
within 0.7 %."""
