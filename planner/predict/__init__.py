"""The studies and the register of quantities: from a plan to predictions."""
