"""whirlcard: plans and safety-checks whirl-stand runs of helicopter-type rotors."""

__version__ = "0.1.0"
