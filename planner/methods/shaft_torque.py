"""Torque over rotor speed: what the drive can give, and the rotor's between solved speeds."""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array

_POINTS_OF_A_PARABOLA = 3


def motor_torque_n_m(
    speed_rad_s: npt.ArrayLike,
    torque_rating_N_m: float,
    power_rating_W: float,
    table: tuple[tuple[float, float], ...] = (),
) -> Array:
    """Greatest torque of a drive at the rotor shaft: the least of its bounds.

    Q = min(Q_rating, P_rating / Omega, table(Omega))

    Args:
        speed_rad_s: Rotor speed [rad/s].
        torque_rating_N_m: Torque rating at the rotor shaft [N m].
        power_rating_W: Power rating [W].
        table: Greatest torque [N m] by rotor speed [rad/s], speed increasing, straight between
            rows; empty: the ratings bound it alone.

    Returns:
        Torque [N m], broadcast shape; 0 beyond the table's last speed.

    Source:
        Definition.

    Example:
        >>> motor_torque_n_m([0.0, 20.0, 50.0], 1000.0, 25000.0).tolist()
        [1000.0, 1000.0, 500.0]
    """
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    least = power_rating_W / np.maximum(speed, power_rating_W / torque_rating_N_m)
    if table:
        rows = np.array(table)
        least = np.minimum(least, np.interp(speed, rows[:, 0], rows[:, 1], right=0.0))
    return np.asarray(least)


def finer_torque(speed_rad_s: Array, torque_N_m: Array, parts: int) -> tuple[Array, Array]:
    """Torque at speeds between tabled ones, by cubics that make no hills of their own.

    Slopes at the nodes are those of a parabola through three nodes, cut to three times the lesser
    neighbouring slope: torque that grows with the square of speed is met exactly.

    Args:
        speed_rad_s: Tabled speeds, all rising or all falling, (lanes, nodes) [rad/s].
        torque_N_m: Torque there, (lanes, columns, nodes) [N m].
        parts: Pieces that each interval is cut into.

    Returns:
        Speeds (lanes, fine) [rad/s] and torque (lanes, columns, fine) [N m], the tabled among
        them.

    Raises:
        ValueError: Fewer than three nodes.

    Source:
        Fritsch and Carlson, SIAM Journal on Numerical Analysis 17 (1980) 238-246 (from memory).
    """
    nodes = speed_rad_s.shape[1]
    if nodes < _POINTS_OF_A_PARABOLA:
        msg = f"torque over speed: expected three speeds or more, found {nodes}; table more"
        raise ValueError(msg)
    h = np.diff(speed_rad_s, axis=1)[:, None, :]
    rise = np.diff(torque_N_m, axis=2) / h
    slope = _slopes(h, rise)
    s = np.arange(parts) / parts
    low, high = torque_N_m[..., :-1, None], torque_N_m[..., 1:, None]
    first, last = (h * slope[..., :-1])[..., None], (h * slope[..., 1:])[..., None]
    value = low + s * (first + s * (3.0 * (high - low) - 2.0 * first - last))
    value = value + s**3 * (first + last - 2.0 * (high - low))
    speed = speed_rad_s[:, :-1, None] + s * np.diff(speed_rad_s, axis=1)[..., None]
    lanes, columns = torque_N_m.shape[:2]
    return (
        np.concatenate([speed.reshape(lanes, -1), speed_rad_s[:, -1:]], axis=1),
        np.concatenate([value.reshape(lanes, columns, -1), torque_N_m[..., -1:]], axis=2),
    )


def _slopes(h: Array, rise: Array) -> Array:
    """Slopes at the nodes, (..., nodes), from lengths and slopes of the intervals."""
    inner = rise[..., :-1] * h[..., 1:] + rise[..., 1:] * h[..., :-1]
    inner = inner / (h[..., :-1] + h[..., 1:])
    ends = [
        ((2.0 * h[..., i] + h[..., j]) * rise[..., i] - h[..., i] * rise[..., j])
        / (h[..., i] + h[..., j])
        for i, j in ((0, 1), (-1, -2))
    ]
    slope = np.concatenate([ends[0][..., None], inner, ends[1][..., None]], axis=-1)
    before = np.concatenate([rise[..., :1], rise], axis=-1)
    after = np.concatenate([rise, rise[..., -1:]], axis=-1)
    most = 3.0 * np.minimum(np.abs(before), np.abs(after))
    alike = (np.sign(before) == np.sign(after)) & (np.sign(slope) == np.sign(before))
    return np.asarray(np.where(alike, np.clip(slope, -most, most), 0.0))
