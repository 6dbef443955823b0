"""The register of quantities: the one vocabulary of rule books, paper and commands.

A new quantity is one entry here (or in a neighbour that this page gathers) and one function in a
study. The order is the order on paper.
"""

from __future__ import annotations

from types import MappingProxyType
from typing import TYPE_CHECKING

from planner.predict.register_general import GENERAL
from planner.predict.register_march import COURSE, MARCHED
from planner.predict.register_resonance import RESONANCE
from planner.predict.register_rotor import ROTOR
from planner.predict.register_speeds import SPEEDS

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.results import Quantity

REGISTER: Mapping[str, Quantity] = MappingProxyType(
    {
        quantity.id: quantity
        for quantity in (*GENERAL, *ROTOR, *MARCHED, COURSE, *RESONANCE, *SPEEDS)
    }
)

REFERENCES: Mapping[str, str] = MappingProxyType(
    {
        "design_maximum_speed": "rpm",
        "proven_speed": "rpm",
        "lowest_design_or_proven_speed": "rpm",
        "full_speed": "rpm",
        "card_speed": "rpm",
        "stop_free_speed": "rpm",
        "drive_maximum_speed": "rpm",
        "drive_torque_rating": "N m",
        "drive_power_rating": "kW",
        "stand_thrust_rating": "N",
        "stand_hub_moment_rating": "N m",
        "stand_hub_amplitude_rating": "mm",
        "root_force_rating": "kN",
        "root_moment_rating": "N m",
        "droop_stop_moment_rating": "N m",
        "up_stop_moment_rating": "N m",
        "lag_stop_moment_rating": "N m",
        "flap_travel": "deg",
        "lag_travel": "deg",
        "cyclic_authority": "deg",
        "blade_radius": "m",
    }
)
"""Reference values that a rule's limit may be a share of: id to display unit."""
