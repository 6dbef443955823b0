"""The invented rotor of the stored references: that of the articulated sample, kept as it was.

It is written down again here so that a change of the sample does not make the references stale.
"""

from __future__ import annotations

import numpy as np

from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    PointMass,
    Rotor,
    SectionSpan,
    Stations,
    Stop,
    SymmetricSection,
)

# radius [m], chord [m], twist [deg], mass [kg/m], flap stiffness, lag stiffness [N m²]
STATIONS = np.array([
    [0.2, 0.12, 5.714, 14.0, 60000.0, 430000.0],
    [0.35, 0.12, 5.5, 14.0, 50000.0, 358000.0],
    [0.6, 0.18, 5.143, 11.0, 16000.0, 286000.0],
    [0.9, 0.32, 4.714, 8.0, 7000.0, 215000.0],
    [1.2, 0.32, 4.286, 7.2, 5500.0, 184000.0],
    [2.5, 0.32, 2.429, 7.2, 5500.0, 184000.0],
    [4.0, 0.32, 0.286, 7.0, 5200.0, 179000.0],
    [5.2, 0.32, -1.429, 7.0, 5000.0, 172000.0],
    [5.6, 0.32, -2.0, 7.0, 5000.0, 172000.0],
])  # fmt: skip

DROOP_STOP = Stop(np.radians(-1.5), 200e3, 500.0, 4500.0)
UP_STOP = Stop(np.radians(16.0), 200e3, 500.0, 6000.0)


def reference_rotor() -> Rotor:
    """Four articulated blades of 5.6 m with fixed stops."""
    r, chord, twist, mass, flap, lag = STATIONS.T
    flat = np.ones_like(r)
    stations = Stations(
        r, chord, np.radians(twist), mass, flap, lag, 2e4 * flat, 0.05 * flat, 0.0 * r, 0.0 * r
    )
    section = SymmetricSection("12 % symmetric", 5.73, 0.0087, 0.4, np.radians(13.0))
    tip = (PointMass("tip balance weight", 5.5, 1.5),)
    spans = (SectionSpan(section, 0.9, 5.6),)
    return Rotor(
        name="reference rotor (invented)",
        n_blades=4,
        clockwise=False,
        blade=Blade(5.6, 0.9, 4.2, stations, tip, spans, ("1", "2", "3", "4")),
        hub=ArticulatedHub(0.22, 0.35, 0.0, 0.0, 0.0, 0.0, 1200.0, 0.0, 0.0),
        droop_stop=DROOP_STOP,
        up_stop=UP_STOP,
        control_stiffness_N_m_rad=21e3,
        cyclic_authority_rad=np.radians(6.0),
        design_maximum_rad_s=400.0 * np.pi / 30.0,
        proven_rad_s=396.0 * np.pi / 30.0,
        root_force_rating_N=260e3,
    )
