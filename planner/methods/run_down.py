"""Rotor speed over time from one balance of torques, integrated over speed instead of over time.

I dOmega/dt = Q_motor - Q_rotor(Omega) - Q_friction - Q_brake. Between neighbouring speeds the net
torque is taken as straight, so that the time of each piece is a logarithm in closed form and no
step of time matters. Where the net torque does not carry the speed onward, the time is infinite.
"""

from dataclasses import dataclass, fields

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array

_PASSES = 3
"""Rounds in which torque and time of a piece are made to agree while the controls move."""
_NEARLY_EVEN = 1e-3
"""Logarithm of the torques' ratio below which a series stands in for a difference that cancels."""


@dataclass(frozen=True, slots=True, eq=False)
class Travel:
    """A change of rotor speed from node to node, all the way up or all the way down.

    Attributes:
        speed_rad_s: Rotor speed at the nodes, (lanes, nodes).
        time_s: Time at the nodes, 0 at the first, infinite where never reached, (lanes, nodes).
        turns: Turns made up to the nodes, (lanes, nodes).
        begin_N_m: Net torque in the sense of the change where each piece begins, (lanes, pieces).
        end_N_m: Net torque where each piece ends, (lanes, pieces).
        inertia_kg_m2: Rotating inertia, (lanes,).
    """

    speed_rad_s: Array
    time_s: Array
    turns: Array
    begin_N_m: Array
    end_N_m: Array
    inertia_kg_m2: Array


@dataclass(frozen=True, slots=True, eq=False)
class RunDown:
    """Rotors that run down without power, and what slows them; scalars a lane of shape (lanes,).

    Attributes:
        speed_rad_s: Falling rotor speeds from the start to 0, (lanes, nodes).
        rotor_torque_N_m: Rotor torque at these speeds while the controls are moved: columns at
            equal shares of the move, the first before and the last after it, (lanes, columns,
            nodes). One column: the controls stay.
        inertia_kg_m2: Rotating inertia.
        friction_N_m: Friction of drive and bearings.
        brake_N_m: Brake torque, 0 without a brake.
        brake_from_rad_s: Speed at and below which the brake acts.
        brake_delay_s: Time before which it does not act, however low the speed.
        delay_s: Time before the controls begin to move.
        move_s: Time that the move takes.
    """

    speed_rad_s: Array
    rotor_torque_N_m: Array
    inertia_kg_m2: Array
    friction_N_m: Array
    brake_N_m: Array
    brake_from_rad_s: Array
    brake_delay_s: Array
    delay_s: Array
    move_s: Array

    def __post_init__(self) -> None:
        """Refuse what is no run-down."""
        lanes, nodes = self.speed_rad_s.shape
        columns = self.rotor_torque_N_m.shape[1] if self.rotor_torque_N_m.ndim > 1 else 1
        shapes = {"speed_rad_s": (lanes, nodes), "rotor_torque_N_m": (lanes, columns, nodes)}
        for field in fields(self):
            values, shape = getattr(self, field.name), shapes.get(field.name, (lanes,))
            if values.shape != shape or not np.all(np.isfinite(values)):
                _refuse(field.name, f"finite values of shape {shape}", f"{values.shape}")
            if field.name != "rotor_torque_N_m" and np.any(values < 0.0):
                _refuse(field.name, "values from 0 up", f"{np.min(values):g}")
        if not np.all(np.diff(self.speed_rad_s, axis=1) < 0.0):
            _refuse("speed_rad_s", "falling speeds", "others")
        if not np.all(self.inertia_kg_m2 > 0.0):
            _refuse("inertia_kg_m2", "values above 0", f"{np.min(self.inertia_kg_m2):g}")


def run_down(case: RunDown) -> Travel:
    """Speed over time of rotors without power.

    t(Omega) = int I dOmega / (Q_rotor + Q_friction + Q_brake), from the start speed downward; the
    brake counts at and below its speed, and not before its time; it splits the piece in which it
    begins to act.

    Args:
        case: The rotors and what slows them.

    Returns:
        Speeds and times; infinite from the first node that the torques do not carry the speed to.
        A lane's numbers do not depend on the others.

    Validity:
        One degree of freedom; torque as in steady turning at each speed. Controls move along a
        straight line at a steady rate. A rotor that its air drives faster at first counts as one
        that never slows.

    Source:
        Newton's law for a shaft; integration of straight pieces (derived).

    Example:
        >>> one = np.ones(1)
        >>> flat = RunDown(np.array([[30.0, 0.0]]), np.full((1, 1, 2), 50.0), 2000.0 * one,
        ...                250.0 * one, *[0.0 * one] * 5)
        >>> float(run_down(flat).time_s[0, -1])
        200.0
    """
    if not np.any(case.brake_delay_s * case.brake_from_rad_s):
        return _with_brake_from(case, case.brake_from_rad_s)
    free = _with_brake_from(case, np.zeros_like(case.brake_from_rad_s))
    on_time = speed_at(free, case.brake_delay_s[:, None])[:, 0]
    return _with_brake_from(case, np.minimum(case.brake_from_rad_s, on_time))


def run_up(
    speed_rad_s: Array,
    motor_N_m: Array,
    rotor_torque_N_m: Array,
    friction_N_m: Array,
    inertia_kg_m2: Array,
) -> Travel:
    """Speed over time of rotors that their drives bring up with all the torque they have.

    t(Omega) = int I dOmega / (Q_motor - Q_rotor - Q_friction)

    Args:
        speed_rad_s: Rising rotor speeds, (lanes, nodes) [rad/s].
        motor_N_m: Motor torque at these speeds, (lanes, nodes) [N m].
        rotor_torque_N_m: Rotor torque at these speeds, (lanes, nodes) [N m].
        friction_N_m: Friction of drive and bearings, (lanes,) [N m].
        inertia_kg_m2: Rotating inertia, (lanes,) [kg m2].

    Returns:
        Speeds and times; infinite from the first node that the drive does not reach.

    Validity:
        One degree of freedom; torque as in steady turning at each speed.

    Source:
        Newton's law for a shaft; integration of straight pieces (derived).

    Example:
        >>> path = run_up(np.array([[0.0, 30.0]]), np.array([[900.0, 900.0]]),
        ...               np.array([[100.0, 100.0]]), np.array([200.0]), np.array([2000.0]))
        >>> float(path.time_s[0, -1])
        100.0
    """
    net = motor_N_m - rotor_torque_N_m - friction_N_m[:, None]
    return travel(speed_rad_s, net[:, :-1], net[:, 1:], inertia_kg_m2)


def travel(speed_rad_s: Array, begin_N_m: Array, end_N_m: Array, inertia_kg_m2: Array) -> Travel:
    """Times and turns from node to node where the net torque is straight over speed.

    dt = I h ln(D_e / D_b) / (D_e - D_b) of a piece of length h with net torque D_b to D_e

    Args:
        speed_rad_s: Rotor speeds, all rising or all falling, (lanes, nodes) [rad/s].
        begin_N_m: Net torque in the sense of the change, where each piece begins,
            (lanes, nodes - 1) [N m].
        end_N_m: The same where it ends, (lanes, nodes - 1) [N m].
        inertia_kg_m2: Rotating inertia, (lanes,) [kg m2].

    Returns:
        The travel.

    Source:
        Integration (derived).
    """
    step = np.diff(speed_rad_s, axis=1)
    inertia = inertia_kg_m2[:, None]
    seconds, turns = _piece(speed_rad_s[:, :-1], step, begin_N_m, end_N_m, inertia)
    start = np.zeros((speed_rad_s.shape[0], 1))
    return Travel(
        speed_rad_s,
        np.concatenate([start, np.cumsum(seconds, axis=1)], axis=1),
        np.concatenate([start, np.cumsum(turns, axis=1)], axis=1),
        begin_N_m,
        end_N_m,
        inertia_kg_m2,
    )


def reach(path: Travel, speed_rad_s: Array) -> tuple[Array, Array]:
    """Time and turns until given speeds are reached.

    Args:
        path: Change of speed.
        speed_rad_s: Speeds to reach, (lanes, wanted) [rad/s].

    Returns:
        Time [s] and turns, each (lanes, wanted): infinite where never reached, not a number for a
        speed outside the path.
    """
    sense = np.sign(path.speed_rad_s[:, -1:] - path.speed_rad_s[:, :1])
    way, wanted = sense * path.speed_rad_s, sense * speed_rad_s
    inside = (wanted >= way[:, :1]) & (wanted <= way[:, -1:])
    passed = np.sum(way[:, None, :] <= wanted[:, :, None], axis=2)
    k = np.clip(passed - 1, 0, path.begin_N_m.shape[1] - 1)

    def at(values: Array) -> Array:
        return np.asarray(np.take_along_axis(values, k, axis=1))

    whole = at(np.diff(path.speed_rad_s, axis=1))
    part = speed_rad_s - at(path.speed_rad_s)
    share = part / np.where(whole == 0.0, 1.0, whole)
    begin = at(path.begin_N_m)
    end = begin + share * (at(path.end_N_m) - begin)
    inertia = path.inertia_kg_m2[:, None]
    seconds, turns = _piece(at(path.speed_rad_s), part, begin, end, inertia)
    time, turned = at(path.time_s) + seconds, at(path.turns) + turns
    return np.where(inside, time, np.nan), np.where(inside, turned, np.nan)


def lanes_of(path: Travel, lanes: slice | npt.NDArray[np.int64]) -> Travel:
    """Some lanes of a travel."""
    return Travel(*(getattr(path, field.name)[lanes] for field in fields(Travel)))


def speed_at(path: Travel, time_s: Array) -> Array:
    """Rotor speed at given times, by the closed form of each piece.

    Args:
        path: Change of speed.
        time_s: Times from 0 up, (lanes, times) [s].

    Returns:
        Speed, (lanes, times) [rad/s]; the last speed, exactly, from when it is reached. A speed
        that the torques do not carry further stays, or is neared for ever.
    """
    pieces = path.begin_N_m.shape[1]
    rows = zip(path.time_s, time_s, strict=True)
    passed = [np.searchsorted(nodes, times, side="right") for nodes, times in rows]
    k = np.clip(np.array(passed) - 1, 0, pieces - 1)

    def at(values: Array) -> Array:
        return np.asarray(np.take_along_axis(values, k, axis=1))

    whole, begin = at(np.diff(path.speed_rad_s, axis=1)), at(path.begin_N_m)
    length = np.abs(whole)
    rise = (at(path.end_N_m) - begin) / np.where(length == 0.0, 1.0, length)
    ends = path.time_s[:, -1:]
    since = (np.minimum(time_s, ends) - at(path.time_s)) / path.inertia_kg_m2[:, None]
    y = rise * since
    grown = np.where(y == 0.0, 1.0, np.expm1(y) / np.where(y == 0.0, 1.0, y))
    gone = np.clip(begin * since * grown, 0.0, length)
    speed = at(path.speed_rad_s) + np.sign(whole) * gone
    return np.asarray(np.where(time_s >= ends, path.speed_rad_s[:, -1:], speed))


def _piece(
    speed: Array, step: Array, begin: Array, end: Array, inertia: Array
) -> tuple[Array, Array]:
    """Time and turns of pieces of signed length ``step``; infinite where torque fails."""
    drives = (begin > 0.0) & (end > 0.0)
    from_torque, to_torque = np.where(drives, begin, 1.0), np.where(drives, end, 1.0)
    x = np.log(to_torque / from_torque)
    x = np.where(x == 0.0, np.finfo(np.float64).tiny, x)
    grown = np.expm1(x)
    share = x / grown
    even = np.abs(x) < _NEARLY_EVEN
    lever = (grown - x) / np.where(even, 1.0, grown) ** 2
    lever = np.where(even, 0.5 - x / 3.0 + x**2 / 12.0, lever)
    scale = inertia * np.abs(step) / from_torque
    turns = scale * (speed * share + step * lever) / (2.0 * np.pi)
    lost = ~drives & (step != 0.0)
    return np.where(lost, np.inf, scale * share), np.where(lost, np.inf, turns)


def _with_brake_from(case: RunDown, brake_from_rad_s: Array) -> Travel:
    """Run-down with a brake that acts at and below given speeds, (lanes,)."""
    speed, torque = _split_at(case, brake_from_rad_s)
    acts = np.arange(speed.shape[1] - 1) % 2
    load = case.friction_N_m[:, None] + acts * case.brake_N_m[:, None]
    rotor = _blend(torque, _shares_moved(case, speed, torque, load))
    return travel(speed, rotor[:, :-1] + load, rotor[:, 1:] + load, case.inertia_kg_m2)


def _split_at(case: RunDown, brake_from_rad_s: Array) -> tuple[Array, Array]:
    """Speeds and torques with each piece cut in two: above and below the brake's speed."""
    high, low = case.speed_rad_s[:, :-1], case.speed_rad_s[:, 1:]
    middle = np.clip(brake_from_rad_s[:, None], low, high)
    share = ((high - middle) / (high - low))[:, None, :]
    lanes, columns, nodes = case.rotor_torque_N_m.shape
    speed, torque = np.empty((lanes, 2 * nodes - 1)), np.empty((lanes, columns, 2 * nodes - 1))
    speed[:, 0::2], speed[:, 1::2] = case.speed_rad_s, middle
    torque[..., 0::2] = case.rotor_torque_N_m
    first = case.rotor_torque_N_m[..., :-1]
    torque[..., 1::2] = first + share * (case.rotor_torque_N_m[..., 1:] - first)
    return speed, torque


def _shares_moved(case: RunDown, speed: Array, torque: Array, load: Array) -> Array:
    """Share of the control move that is done at each node, (lanes, nodes)."""
    inertia, time = case.inertia_kg_m2, np.zeros(speed.shape[0])
    shares = np.zeros_like(speed)
    if np.all(torque == torque[:, :1]):
        return shares
    shares[:, 0] = _moved(case, time)
    for k in range(speed.shape[1] - 1):
        if np.all(shares[:, k] == 1.0):
            shares[:, k:] = 1.0
            break
        begin = _blend(torque[..., k, None], shares[:, k, None])[:, 0] + load[:, k]
        step, reached = speed[:, k + 1] - speed[:, k], time
        for _ in range(_PASSES):
            share = _moved(case, reached)
            end = _blend(torque[..., k + 1, None], share[:, None])[:, 0] + load[:, k]
            reached = time + _piece(speed[:, k], step, begin, end, inertia)[0]
        time, shares[:, k + 1] = reached, _moved(case, reached)
    return shares


def _moved(case: RunDown, time: Array) -> Array:
    """Share of the control move that is done at a time."""
    since = time - case.delay_s
    at_once = np.where(since >= 0.0, 1.0, 0.0)
    gradual = np.clip(since / np.where(case.move_s > 0.0, case.move_s, 1.0), 0.0, 1.0)
    return np.where(case.move_s > 0.0, gradual, at_once)


def _blend(torque: Array, share: Array) -> Array:
    """Torque (lanes, nodes) between columns of (lanes, columns, nodes)."""
    last = torque.shape[1] - 1
    place = share * last
    low = np.minimum(place.astype(np.int64), max(last - 1, 0))
    below = np.take_along_axis(torque, low[:, None, :], axis=1)[:, 0]
    above = np.take_along_axis(torque, np.minimum(low + 1, last)[:, None, :], axis=1)[:, 0]
    return np.asarray(below + (place - low) * (above - below))


def _refuse(name: str, expected: str, found: str) -> None:
    msg = f"run-down, {name}: expected {expected}, found {found}; correct that value"
    raise ValueError(msg)
