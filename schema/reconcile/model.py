"""The motor as a set of observation equations in logarithms: which figure measures what.

Every published figure is an observation of a few unknowns (the constants and the printed points),
and the laws that carry customary scatter of their own (the no-load and the nominal point) are
further rows. Most rows are sums of logarithms, hence linear and the same for all motors
(``LINEAR``); the few others (``nonlinear_rows``) have their residuals and slopes computed.

Relations: the permanent-magnet DC motor, Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed.,
sections 7.7 and 11.1 (chapter numbers from memory); definitions of the time constants and of the
motor constant as in NEMA ICS 16 (from memory).
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from ..vocabulary import quantities

UNKNOWNS = (
    "torque_constant", "resistance", "inertia", "inductance", "voltage", "no_load_current",
    "no_load_speed", "stall_torque", "nominal_current", "nominal_torque", "nominal_speed",
    "friction_torque", "viscous_damping", "continuous_stall_current", "peak_current",
)  # fmt: skip
"""The unknowns of one motor, as natural logarithms of SI values of the DC motor."""

K, R, J, L, U, I0, N0, TS, IN, TN, NN, TF, B, ICS, IPK = range(len(UNKNOWNS))

LINEAR: dict[str, tuple[dict[int, float], float]] = {
    # figure: exponents of the unknowns, and the logarithm of the factor before them
    "torque_constant": ({K: 1}, 0.0),
    "back_emf_constant": ({K: 1}, 0.0),
    "speed_constant": ({K: -1}, 0.0),
    "terminal_resistance": ({R: 1}, 0.0),
    "terminal_inductance": ({L: 1}, 0.0),
    "rotor_inertia": ({J: 1}, 0.0),
    "nominal_voltage": ({U: 1}, 0.0),
    "no_load_current": ({I0: 1}, 0.0),
    "no_load_speed": ({N0: 1}, 0.0),
    "stall_torque": ({TS: 1}, 0.0),
    "stall_current": ({U: 1, R: -1}, 0.0),
    "nominal_current": ({IN: 1}, 0.0),
    "nominal_torque": ({TN: 1}, 0.0),
    "nominal_speed": ({NN: 1}, 0.0),
    "rated_power": ({TN: 1, NN: 1}, 0.0),
    "rated_efficiency": ({TN: 1, NN: 1, U: -1, IN: -1}, 0.0),
    "speed_torque_gradient": ({R: 1, K: -2}, 0.0),
    "motor_constant": ({K: 1, R: -0.5}, 0.0),
    "mechanical_time_constant": ({J: 1, R: 1, K: -2}, 0.0),
    "electrical_time_constant": ({L: 1, R: -1}, 0.0),
    "friction_torque": ({TF: 1}, 0.0),
    "viscous_damping": ({B: 1}, 0.0),
    "continuous_stall_current": ({ICS: 1}, 0.0),
    "continuous_stall_torque": ({K: 1, ICS: 1}, 0.0),
    "peak_current": ({IPK: 1}, 0.0),
    "maximum_power": ({N0: 1, TS: 1}, -np.log(4.0)),
    # the two that are not sums of logarithms; their slopes are computed
    "peak_torque": ({}, 0.0),
    "maximum_efficiency": ({}, 0.0),
}  # fmt: skip

FIGURES = tuple(LINEAR)
INDEX = {key: i for i, key in enumerate(FIGURES)}
F = len(FIGURES)
P = len(UNKNOWNS)

POINT_FIGURES = frozenset(
    {"no_load_speed", "stall_torque", "nominal_current", "nominal_torque", "nominal_speed",
     "friction_torque", "nominal_voltage"}
)  # fmt: skip
"""Figures that are unknowns themselves: their own row holds to the printed digits only, the
customary scatter belongs to the law that ties them to the constants."""

FAMILY_ROWS: tuple[tuple[str, dict[int, float]], ...] = (
    ("motor_constant", {K: 1, R: -0.5}),
    ("rotor_inertia", {J: 1}),
    ("electrical_time_constant", {L: 1, R: -1}),
    ("friction_torque", {K: 1, I0: 1}),
)
"""What the windings of one motor size share."""

LAW_SCATTER = {
    # customary scatter of the laws, one standard deviation (common practice, no source); that of
    # the nominal torque is from scatter of 5 % of T_N and as much of I_N
    "no_load_speed": 0.025, "stall_torque": 0.02, "nominal_torque": 0.07, "nominal_speed": 0.025,
    "friction_torque": 0.10,
}  # fmt: skip

LAW_BINDS = {
    # the figures of which at least one must be published for a law to say anything
    "no_load_speed": ("no_load_speed", "maximum_power"),
    "stall_torque": ("stall_torque", "maximum_power"),
    "nominal_torque": ("nominal_torque", "rated_power", "rated_efficiency"),
    "nominal_speed": ("nominal_speed", "rated_power", "rated_efficiency"),
    "friction_torque": ("friction_torque", "viscous_damping"),
}

UNPUBLISHED_I0 = (np.log(0.015), 1.0)
"""I0·Ra/U of a motor whose no-load current isn't published: mean and sd of its logarithm
(brushed and block; common practice, no source)."""
UNPUBLISHED_I0_SERVO = (np.log(0.025), np.log(2.0))
"""I0/I_N of a sinusoidal motor whose no-load current isn't published."""

UNPUBLISHED_IN = (np.log(0.13), 0.6)
"""Ra·I_N/U of a brushed or block motor whose nominal current isn't published: a motor isn't rated
near its stall (common practice, no source)."""

UNPUBLISHED_NN_SERVO = (np.log(0.65), 0.5)
"""Km·n_N/U of a sinusoidal motor whose nominal speed isn't published: the maker's choice, yet not
far below what its bus allows (common practice, no source)."""

HOT_RESISTANCE = 1.0 + 0.00385 * 75.0
"""Ra at 100 °C over Ra at 25 °C: the "hot" reading of a nominal speed where no temperature is
printed (common practice, no source)."""

HOT_SPREAD = 0.08
"""Standard deviation of the logarithm of that ratio."""

PEAK_BAND = (np.log(0.5), np.log(1.05))
"""Peak torque over Km times peak current: saturation lowers it, nothing raises it."""

CLIP = 0.9


@dataclass(frozen=True, slots=True)
class Readings:
    """What a table means where two readings are customary."""

    stall_torque_net: bool = True
    nominal_speed_hot: bool = False
    maximum_power_electrical: bool = False


def linear_matrix(readings: Readings) -> tuple[Floats, Floats]:
    """Rows of the figures over the unknowns, shape (F, P), and constants, shape (F,)."""
    matrix, constant = np.zeros((F, P)), np.zeros(F)
    for i, (exponents, shift) in enumerate(LINEAR.values()):
        for unknown, exponent in exponents.items():
            matrix[i, unknown] = exponent
        constant[i] = shift
    if readings.maximum_power_electrical:
        i = INDEX["maximum_power"]
        matrix[i] = 0.0
        matrix[i, U], matrix[i, R] = 2.0, -1.0
    return matrix, constant


def family_matrix() -> Floats:
    """Rows of the shared combinations over the unknowns, shape (4, P)."""
    matrix = np.zeros((len(FAMILY_ROWS), P))
    for i, (_, exponents) in enumerate(FAMILY_ROWS):
        for unknown, exponent in exponents.items():
            matrix[i, unknown] = exponent
    return matrix


def ridge() -> tuple[Floats, Floats]:
    """Mean and weight of a weak prior on every unknown: the middle of the plausible range."""
    keys = (
        "torque_constant", "terminal_resistance", "rotor_inertia", "terminal_inductance",
        "nominal_voltage", "no_load_current", "no_load_speed", "stall_torque", "nominal_current",
        "nominal_torque", "nominal_speed", "friction_torque", "viscous_damping",
        "continuous_stall_current", "peak_current",
    )  # fmt: skip
    bounds = np.log([quantities()[key].plausible for key in keys])
    mean = bounds.mean(axis=1)
    sd = (bounds[:, 1] - bounds[:, 0]) / 2.0
    return mean, 1.0 / (2.0 * sd) ** 2


Slopes = list[tuple[int, Floats | float]]


def nonlinear_rows(
    x: Floats,
    y: Floats,
    weight: Floats,
    laws: Floats,
    servo: NDArray[np.bool_],
    readings: Readings,
    typical: bool = False,
) -> Iterator[tuple[Floats, Floats, Slopes]]:
    """Residual, weight and slopes of the model for the rows that aren't sums of logarithms.

    x (n, P) unknowns; y (n, F) logarithms of the figures; weight (n, F) their weights; laws
    (n, 8) weights of the laws of ``LAW_SCATTER`` and of the priors on unpublished I0, I_N and n_N.
    With ``typical`` the small corrections take typical values: the log-linear start.
    """
    k, r, u, i0, i_n = x[:, K], x[:, R], x[:, U], x[:, I0], x[:, IN]
    brake = 0.015 if typical else np.minimum(np.exp(np.minimum(r + i0 - u, 0.0)), CLIP)
    brake = np.broadcast_to(np.asarray(brake, dtype=float), k.shape)
    lost, steep = np.log1p(-brake), brake / (1.0 - brake)

    # n0 = (U − Ra·I0)/Km
    if laws[:, 0].any():
        residual = u - k + lost - x[:, N0]
        slopes: Slopes = [(N0, 1.0), (U, -1.0 - steep), (K, 1.0), (R, steep), (I0, steep)]
        yield residual, laws[:, 0], slopes

    # T_s = Km·(I_s − I0), or Km·I_s
    if not laws[:, 1].any():
        pass
    elif readings.stall_torque_net:
        residual = k + u - r + lost - x[:, TS]
        slopes = [(TS, 1.0), (K, -1.0), (U, -1.0 - steep), (R, 1.0 + steep), (I0, steep)]
        yield residual, laws[:, 1], slopes
    else:
        yield k + u - r - x[:, TS], laws[:, 1], [(TS, 1.0), (K, -1.0), (U, -1.0), (R, 1.0)]

    # T_N = Km·(I_N − I0)
    if laws[:, 2].any():
        idle = 0.05 if typical else np.minimum(np.exp(np.minimum(i0 - i_n, 0.0)), CLIP)
        idle = np.broadcast_to(np.asarray(idle, dtype=float), k.shape)
        slope = idle / (1.0 - idle)
        residual = k + i_n + np.log1p(-idle) - x[:, TN]
        yield residual, laws[:, 2], [(TN, 1.0), (K, -1.0), (IN, -1.0 - slope), (I0, slope)]

    # n_N = (U − Ra·I_N)/Km; on a servo sheet only n_N <= U/Km
    if laws[:, 3].any():
        hot = HOT_RESISTANCE if readings.nominal_speed_hot else 1.0
        drop = 0.15 if typical else np.minimum(hot * np.exp(np.minimum(r + i_n - u, 0.5)), CLIP)
        drop = np.where(servo, 0.0, drop)
        slope = drop / (1.0 - drop)
        residual = u - k + np.log1p(-drop) - x[:, NN]
        w = laws[:, 3]
        if readings.nominal_speed_hot:
            w = w / (1.0 + w * (HOT_SPREAD * slope) ** 2)
        w = np.where(servo & ((residual > 0.0) | typical), 0.0, w)
        yield residual, w, [(NN, 1.0), (U, -1.0 - slope), (K, 1.0), (R, slope), (IN, slope)]

    # Km·I0 = T_c + b·n0, b = 0 unless published
    if laws[:, 4].any():
        damped = weight[:, INDEX["viscous_damping"]] > 0.0
        coulomb, viscous = x[:, TF], np.where(damped, x[:, B] + x[:, N0], -np.inf)
        if typical:
            viscous = np.full_like(viscous, -np.inf)
        total = np.logaddexp(coulomb, viscous)
        share = np.exp(np.clip(viscous - total, -50.0, 0.0)) * damped
        slopes = [(TF, 1.0 - share), (B, share), (N0, share), (K, -1.0), (I0, -1.0)]
        yield k + i0 - total, laws[:, 4], slopes

    # I0 where it isn't published
    mean, servo_mean = UNPUBLISHED_I0[0], UNPUBLISHED_I0_SERVO[0]
    if laws[:, 5].any():
        residual = np.where(servo, servo_mean - i0 + i_n, mean - i0 - r + u)
        r_slope, n_slope = np.where(servo, 0.0, 1.0), np.where(servo, -1.0, 0.0)
        yield residual, laws[:, 5], [(I0, 1.0), (R, r_slope), (U, -r_slope), (IN, n_slope)]

    # I_N where it isn't published
    if laws[:, 6].any():
        residual = UNPUBLISHED_IN[0] - r - i_n + u
        yield residual, laws[:, 6], [(R, 1.0), (IN, 1.0), (U, -1.0)]

    # n_N of a servo motor where it isn't published
    if laws[:, 7].any():
        residual = UNPUBLISHED_NN_SERVO[0] + u - k - x[:, NN]
        yield residual, laws[:, 7], [(NN, 1.0), (K, 1.0), (U, -1.0)]

    # η_max = (1 − √(I0/I_s))²
    i = INDEX["maximum_efficiency"]
    if weight[:, i].any():
        root = np.sqrt(brake)
        slope = -root / (1.0 - root)
        residual = y[:, i] - 2.0 * np.log1p(-root)
        yield residual, weight[:, i], [(I0, slope), (R, slope), (U, -slope)]

    # T_peak <= 1.05·Km·I_peak, and not below half of it
    i = INDEX["peak_torque"]
    if weight[:, i].any():
        gap = y[:, i] - k - x[:, IPK]
        outside = gap - np.clip(gap, *PEAK_BAND)
        w = np.where(outside == 0.0, 0.0, weight[:, i])
        yield outside, w, [(K, 1.0), (IPK, 1.0)]
