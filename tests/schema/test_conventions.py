"""What a printed constant is worth on the DC motor, by integration over a turn of the rotor."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.convention import (
    Commutation,
    Convention,
    armature_current,
    default_convention,
    terminal_impedance,
    to_dc,
)

ANGLES = np.linspace(0, 2 * math.pi, 360_000, endpoint=False)
SINE, BLOCK, BRUSHED = Commutation.SINUSOIDAL, Commutation.BLOCK, Commutation.BRUSHED


def phases(wave) -> np.ndarray:
    return np.stack([wave(ANGLES - shift * 2 * math.pi / 3) for shift in range(3)])


def trapezoid(angle: np.ndarray) -> np.ndarray:
    """Flat for 120 degrees, straight between, peak 1, in step with the sine."""
    return np.clip(6 / math.pi * np.arcsin(np.sin(angle)) / 1.0, -1, 1)


def block(angle: np.ndarray) -> np.ndarray:
    """120 degrees on, 60 off."""
    return np.sign(np.round(np.sin(angle) / math.sqrt(3), 9)) * (np.abs(np.sin(angle)) > 0.5)


def rms(wave: np.ndarray) -> float:
    return float(np.sqrt((wave**2).mean()))


# Back-EMF of a phase, current of a phase, and its armature amperes for a peak of 1.
MACHINES = [(SINE, "sinusoidal", np.sin, np.sin), (BLOCK, "sinusoidal", np.sin, block),
            (BLOCK, "trapezoidal", trapezoid, block)]  # fmt: skip


@pytest.mark.parametrize(("kind", "shape", "emf", "current"), MACHINES)
@pytest.mark.parametrize("voltage", ["peak", "rms"])
@pytest.mark.parametrize("between", ["phase", "lines"])
@pytest.mark.parametrize("per", ["peak", "rms"])
def test_torque_and_voltage_constant_agree(
    kind, shape, emf, current, voltage, between, per
) -> None:
    """The power balance over a turn, Σ e·i = T·ω at 1 rad/s: whatever the sheet prints, both
    constants come to the same one of the DC motor."""
    e, i = phases(emf), phases(current)
    torque = (e * i).sum(axis=0).mean()
    amperes = {"peak": 1.0, "rms": rms(i[0])}[per]
    line = e[0] - e[1]
    printed = {"phase": e[0], "lines": line}[between]
    volts = {"peak": np.abs(printed).max(), "rms": rms(printed)}[voltage]
    kt = to_dc("torque_constant", Convention(current=per), kind) * torque / amperes
    convention = Convention(voltage=voltage, between=between, shape=shape)
    assert to_dc("back_emf_constant", convention, kind) * volts == pytest.approx(kt, rel=1e-4)
    assert to_dc("speed_constant", convention, kind) / volts == pytest.approx(1 / kt, rel=1e-4)


def test_a_delta_winding_is_its_own_line() -> None:
    """The winding of a delta lies between two terminals, and its EMF with it."""
    for voltage in ("peak", "rms"):
        for shape in (None, "trapezoidal"):
            for kind in (SINE, BLOCK):
                line = Convention(voltage=voltage, between="lines", shape=shape)
                delta = Convention(
                    voltage=voltage, between="phase", connection="delta", shape=shape
                )
                assert to_dc("back_emf_constant", delta, kind) == to_dc(
                    "back_emf_constant", line, kind
                )


@pytest.mark.parametrize(("kind", "wave"), [(SINE, np.sin), (BLOCK, block)])
@pytest.mark.parametrize("per", ["peak", "rms"])
def test_copper_loss_is_that_of_the_dc_motor(kind, wave, per) -> None:
    """Σ R_ph·i² over a turn is Ra·Ia² with Ra = 2·R_ph between two terminals of a star."""
    i = phases(wave)
    loss = (i**2).sum(axis=0).mean()
    amperes = {"peak": 1.0, "rms": rms(i[0])}[per]
    Ia = armature_current(per, kind) * amperes
    assert terminal_impedance(Convention(between="phase")) * Ia**2 == pytest.approx(loss, rel=1e-4)
    assert to_dc("nominal_current", Convention(current=per), kind) * amperes == Ia


def test_direct_current_and_terminal_values_stay() -> None:
    for kind in Commutation:
        for current in (None, "dc"):
            assert to_dc("torque_constant", Convention(current=current), kind) == 1
            assert to_dc("peak_current", Convention(current=current), kind) == 1
        assert to_dc("back_emf_constant", Convention(voltage="dc", between="phase"), kind) == 1
        assert to_dc("terminal_resistance", Convention(between="lines"), kind) == 1
        assert to_dc("rotor_inertia", Convention(current="rms"), kind) == 1
    for per in ("peak", "rms"):
        brushed = Convention(current=per, voltage=per, between="phase")
        assert to_dc("torque_constant", brushed, BRUSHED) == 1
        assert to_dc("back_emf_constant", brushed, BRUSHED) == 1


def test_resistance_of_star_and_delta() -> None:
    """Between two terminals of a star lie two windings; of a delta one beside two in series."""
    one, two = 1.0, 2.0
    assert terminal_impedance(Convention(between="phase", connection="star")) == two
    parallel = 1 / (1 / one + 1 / two)
    delta = Convention(between="phase", connection="delta")
    assert terminal_impedance(delta) == pytest.approx(parallel)
    assert to_dc("terminal_inductance", delta, SINE) == pytest.approx(parallel)
    assert terminal_impedance(Convention(connection="delta")) == 1


def test_what_a_sheet_leaves_unsaid() -> None:
    """Servo sheets: A rms, V rms between lines; others: dc and terminal values (common practice,
    no source). Only what the quantity can carry is set."""
    every = frozenset({"current", "voltage", "between"})
    servo = default_convention("back_emf_constant", every, SINE)
    assert (servo.current, servo.voltage, servo.between) == ("rms", "rms", "lines")
    block_ = default_convention("speed_constant", every, BLOCK)
    assert (block_.current, block_.voltage, block_.between) == ("dc", "dc", "lines")
    brushed = default_convention("back_emf_constant", every, BRUSHED)
    assert (brushed.current, brushed.voltage, brushed.between) == ("dc", "dc", None)
    assert default_convention("speed_constant", every, SINE).voltage == "rms"
    assert default_convention("nominal_voltage", every, SINE).voltage == "dc"
    for kind in Commutation:  # mains are alternating, whatever the motor
        assert default_convention("mains_voltage", every, kind).voltage == "rms"
        bare = default_convention("rotor_inertia", frozenset(), kind)
        assert bare == Convention()
        assert bare.as_json() == {}


def test_only_what_applies_is_told() -> None:
    told = Convention(current="rms", temperature=20.0, basis="stated")
    assert told.as_json() == {"current": "rms", "temperature": 20.0, "basis": "stated"}
    changed = told.with_(current="peak", between="lines")
    assert (told.current, changed.current, changed.between) == ("rms", "peak", "lines")
    assert changed.basis == "stated"
    assert [kind.word for kind in Commutation] == ["brushed", "block", "sinusoidal"]
