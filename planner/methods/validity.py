"""Refusal of inputs outside the range in which a method is known to hold."""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

ROUNDING_SHARE = 1e-9


def require_within(
    name: str, value: npt.ArrayLike, bounds: tuple[float, float], unit: str
) -> Array:
    """Return the value as a float array, or refuse it when any element leaves the bounds.

    Args:
        name: What the value is, in words, for the message.
        value: Number or array to look at.
        bounds: Lowest and highest accepted value, both included.
        unit: Unit of value and bounds, for the message.

    Returns:
        The value as a float64 array of its own shape. Rounding of a unit conversion that ends
        outside by a billionth of the bound is taken as the bound.

    Raises:
        ValueError: An element is below, above, or not a number.

    Example:
        >>> require_within("relative humidity", 0.5, (0.0, 1.0), "")
        array(0.5)
    """
    array = np.asarray(value, dtype=np.float64)
    lowest = bounds[0] - ROUNDING_SHARE * abs(bounds[0])
    highest = bounds[1] + ROUNDING_SHARE * abs(bounds[1])
    outside = ~((array >= lowest) & (array <= highest))
    if np.any(outside):
        found = float(array[outside].flat[0])
        message = (
            f"{name}: expected {bounds[0]:g} to {bounds[1]:g} {unit}".rstrip()
            + f", found {found:g}; the method is not known to hold outside that range"
        )
        raise ValueError(message)
    return np.asarray(np.clip(array, bounds[0], bounds[1]))
