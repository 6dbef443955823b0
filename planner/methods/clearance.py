"""Room between a turning blade and the ground, the stand's top and stated obstructions.

Pure geometry for an upright axis over level ground. Heights are above ground unless they are said
to be from the hub; azimuth is zero downwind and grows with rotation.
"""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

RADIUS_RANGE_M = (0.0, 100.0)
HEIGHT_RANGE_M = (-100.0, 100.0)
HUB_HEIGHT_RANGE_M = (0.0, 200.0)
DISTANCE_RANGE_M = (0.0, 1e4)
ANGLE_ROUNDING_RAD = 1e-9
FEWEST_STATIONS = 2
FULL_TURN_RAD = 2.0 * np.pi


def ground_gap_m(lowest_blade_height_m: npt.ArrayLike, hub_height_m: npt.ArrayLike) -> Array:
    """Height of the lowest point of the blades above ground.

    Args:
        lowest_blade_height_m: Lowest height of the blade from the hub, up positive (lanes,
            azimuths, radii) [m].
        hub_height_m: Hub above ground, one or one a lane (lanes,) [m].

    Returns:
        Gap (lanes,), negative where a blade would reach into the ground [m].

    Raises:
        ValueError: An input outside its range.

    Source:
        Geometry.

    Example:
        >>> float(ground_gap_m([[[0.0, -0.7]]], 4.0)[0])
        3.3
    """
    low = require_within("lowest blade height", lowest_blade_height_m, HEIGHT_RANGE_M, "m")
    hub = require_within("hub height", hub_height_m, HUB_HEIGHT_RANGE_M, "m")
    return np.asarray(hub + low.min(axis=(1, 2)))


def azimuth_of_bearing_rad(
    bearing_rad: npt.ArrayLike, wind_from_rad: npt.ArrayLike, *, clockwise: bool
) -> Array:
    """Azimuth at which a blade points to something on the ground.

    psi = +-(bearing - wind_from - pi), plus for a rotor that turns clockwise seen from above

    Args:
        bearing_rad: Bearing of the thing from the rotor axis, clockwise from north [rad].
        wind_from_rad: Bearing from which the wind blows [rad].
        clockwise: Whether the rotor turns clockwise seen from above.

    Returns:
        Azimuth from 0 up to 2 pi, broadcast shape [rad].

    Source:
        Definition of azimuth.

    Example:
        >>> east, north = np.pi / 2, 0.0
        >>> float(np.degrees(azimuth_of_bearing_rad(east, north, clockwise=False)))
        90.0
    """
    turn = np.asarray(bearing_rad, dtype=np.float64) - np.asarray(wind_from_rad) - np.pi
    return np.asarray(np.mod(turn if clockwise else -turn, FULL_TURN_RAD))


def obstruction_gaps_m(
    lowest_blade_height_m: npt.ArrayLike,
    radius_m: npt.ArrayLike,
    hub_height_m: npt.ArrayLike,
    obstruction_distance_m: npt.ArrayLike,
    obstruction_height_m: npt.ArrayLike,
    obstruction_azimuth_rad: npt.ArrayLike | None = None,
) -> Array:
    """Least distance between the blades and each obstruction, a vertical post on the ground.

    Above the post's top it is the slant distance to the top, below it the level distance to the
    post. Where a blade would sweep through the post the gap is negative: height of the blade less
    height of the post at the post's distance. A blade is straight between its stations. Its
    stations are taken once at their radius and once drawn in, so that the blade keeps its length
    when it bends down or up; the lesser distance counts.

    Azimuth sector j of n reaches from 2 pi j / n to 2 pi (j + 1) / n. A blade may be anywhere in
    its sector, so that a post in the same sector counts as being under it.

    Args:
        lowest_blade_height_m: Lowest height of the blade in each sector from the hub, up positive
            (lanes, azimuths, radii); sectors that no blade met carry the lowest of the others [m].
        radius_m: Stations from the axis along the undeflected blade, rising, to the tip (radii,)
            [m].
        hub_height_m: Hub above ground, one or one a lane (lanes,) [m].
        obstruction_distance_m: Distance of the post from the rotor axis (obstructions,) [m].
        obstruction_height_m: Top of the post above ground (obstructions,) [m].
        obstruction_azimuth_rad: Azimuth of the post (obstructions,), or range of azimuth in which
            it may lie (obstructions, 2), from and to in the sense of rotation; None where the
            wind's direction is open: worst over all [rad].

    Returns:
        Distance (lanes, obstructions) [m].

    Raises:
        ValueError: An input outside its range, stations that do not rise, or shapes that do not
            fit.

    Validity:
        Upright axis, thrust up or down; not with the axis level. The heights are those of the
        blade's lowest edge: of its pitch axis less chord and thickness below it. Between stations
        the distance is exact. Inboard of the first station is the hub, of which nothing is said.
        A wide thing is stated by several posts, or by its nearest edge and a range of azimuth.

    Source:
        Geometry.

    Example:
        >>> drooped = np.array([[[0.0, -0.8]]])
        >>> float(obstruction_gaps_m(drooped, [0.5, 6.0], 4.0, [6.0], [2.2])[0, 0])
        1.0
    """
    low = require_within("lowest blade height", lowest_blade_height_m, HEIGHT_RANGE_M, "m")
    radius = require_within("blade radius", radius_m, RADIUS_RANGE_M, "m")
    hub = require_within("hub height", hub_height_m, HUB_HEIGHT_RANGE_M, "m")
    away = require_within("obstruction distance", obstruction_distance_m, DISTANCE_RANGE_M, "m")
    top = require_within("obstruction height", obstruction_height_m, HUB_HEIGHT_RANGE_M, "m")
    away, top = np.broadcast_arrays(np.atleast_1d(away), top)
    _require_blade(low, radius)
    apart = _angle_apart(obstruction_azimuth_rad, low.shape[1], len(away))
    height = np.broadcast_to(hub, len(low))[:, None, None] + low
    gaps = [
        [_post_gap(height, reach, (away[j], top[j]), apart[j]) for j in range(len(away))]
        for reach in (np.broadcast_to(radius, low.shape), _drawn_in(low, radius))
    ]
    return np.asarray(np.min(gaps, axis=0).T.reshape(len(low), len(away)))


def clearance_m(
    lowest_blade_height_m: npt.ArrayLike,
    radius_m: npt.ArrayLike,
    hub_height_m: npt.ArrayLike,
    obstruction_distance_m: npt.ArrayLike,
    obstruction_height_m: npt.ArrayLike,
    obstruction_azimuth_rad: npt.ArrayLike | None = None,
) -> Array:
    """Least distance of the blades from the ground and from every obstruction.

    Args:
        lowest_blade_height_m: As in `obstruction_gaps_m` (lanes, azimuths, radii) [m].
        radius_m: Stations from the axis, rising, to the tip (radii,) [m].
        hub_height_m: Hub above ground, one or one a lane (lanes,) [m].
        obstruction_distance_m: Distance of each post from the rotor axis (obstructions,) [m].
        obstruction_height_m: Top of each post above ground (obstructions,) [m].
        obstruction_azimuth_rad: As in `obstruction_gaps_m`; None for the worst over all azimuths.

    Returns:
        Distance (lanes,), negative where something would be struck [m].

    Raises:
        ValueError: As `obstruction_gaps_m`.

    Validity:
        As `obstruction_gaps_m`. The stand's own top is given as a post at the distance of its
        edge.

    Source:
        Geometry.

    Example:
        >>> drooped = np.array([[[0.0, -0.8]]])
        >>> float(clearance_m(drooped, [0.5, 6.0], 4.0, [9.0, 0.5], [4.0, 2.5])[0])
        1.5
    """
    posts = obstruction_gaps_m(
        lowest_blade_height_m,
        radius_m,
        hub_height_m,
        obstruction_distance_m,
        obstruction_height_m,
        obstruction_azimuth_rad,
    )
    ground = ground_gap_m(lowest_blade_height_m, hub_height_m)
    return np.asarray(np.minimum(ground, posts.min(axis=1, initial=np.inf)))


def _require_blade(low: Array, radius: Array) -> None:
    """Refuse heights that do not belong to the stations, and stations out of order."""
    if low.ndim != 3 or low.shape[1] == 0 or low.shape[2] != len(radius):  # noqa: PLR2004
        message = (
            f"lowest blade height: expected (lanes, azimuths, {len(radius)} radii), found shape "
            f"{low.shape}; give one height for each sector and station"
        )
        raise ValueError(message)
    if len(radius) < FEWEST_STATIONS or np.any(np.diff(radius) <= 0.0):
        message = (
            f"blade radius: expected 2 stations or more, rising, found {radius.tolist()}; "
            "order them from root to tip"
        )
        raise ValueError(message)


def _angle_apart(azimuth: npt.ArrayLike | None, sectors: int, posts: int) -> Array:
    """Least angle between each post and each sector (posts, sectors) [rad]."""
    if azimuth is None:
        return np.zeros((posts, sectors))
    given = np.asarray(azimuth, dtype=np.float64)
    if given.shape not in {(posts,), (posts, 2)} or not np.isfinite(given).all():
        message = (
            f"obstruction azimuth: expected one angle or one range for each of {posts}, found "
            f"{given.tolist()}; give from and to in the sense of rotation"
        )
        raise ValueError(message)
    start, stop = (given, given) if given.ndim == 1 else given.T
    turn = stop - start
    width = np.where(turn < FULL_TURN_RAD, np.mod(turn, FULL_TURN_RAD), FULL_TURN_RAD)[:, None]
    sector = FULL_TURN_RAD / sectors
    middle = sector * (np.arange(sectors) + 0.5)
    offset = np.mod(start[:, None] + 0.5 * width - middle + np.pi, FULL_TURN_RAD) - np.pi
    apart = np.abs(offset) - 0.5 * (sector + width)
    return np.asarray(np.where(apart < ANGLE_ROUNDING_RAD, 0.0, apart))


def _drawn_in(low: Array, radius: Array) -> Array:
    """Distance of the stations from the axis when the blade keeps its length, shaped as low."""
    span = np.diff(radius)
    level = np.sqrt(np.maximum(span**2 - np.diff(low, axis=2) ** 2, 0.0))
    return np.asarray(radius[0] + np.concatenate([0.0 * low[:, :, :1], level.cumsum(axis=2)], 2))


def _post_gap(height: Array, reach: Array, post: tuple[float, float], apart: Array) -> Array:
    """Distance of one post (distance, top) from the blade in each lane (lanes,)."""
    away, top = post
    along, across = reach * np.cos(apart)[:, None] - away, reach * np.sin(apart)[:, None]
    start = np.stack(np.broadcast_arrays(along, across, height - top))
    move, start = np.diff(start, axis=-1), start[..., :-1]
    square = np.square(move)
    whole, level = square.sum(axis=0), square[:2].sum(axis=0)
    to_top = _share(-(start * move).sum(axis=0), whole)
    to_side = _share(-(start[:2] * move[:2]).sum(axis=0), level)
    past_top = _share(-start[2] * move[2], square[2])
    gap = np.full(height.shape[0], np.inf)
    for share in (0.0, 1.0, to_top, to_side, past_top):
        point = start + share * move
        point[2] = np.maximum(point[2], 0.0)
        gap = np.minimum(gap, np.sqrt(np.square(point).sum(axis=0)).min(axis=(1, 2)))
    return np.asarray(np.minimum(gap, _overlap(start, move, apart)))


def _share(part: Array, whole: Array) -> Array:
    """Part over whole within 0 and 1; zero for a whole of nothing."""
    return np.asarray(np.clip(part / np.where(whole > 0.0, whole, 1.0), 0.0, 1.0))


def _overlap(start: Array, move: Array, apart: Array) -> Array:
    """Height of the blade over the post's top where it passes through the post, or infinity."""
    under = (start[0] <= 0.0) & (start[0] + move[0] >= 0.0) & (apart == 0.0)[:, None]
    over = start[2] + _share(-start[0] * move[0], move[0] ** 2) * move[2]
    struck = np.where(under & (over < 0.0), over, np.inf)
    return np.asarray(struck.min(axis=(1, 2)))
