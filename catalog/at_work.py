"""One motor of the catalog at work: under voltage or current control, as a document."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import numpy as np

from ..schema.convention import Commutation
from ..schema.errors import MotorfolioError
from ..schema.operation.drive import (
    DriveError,
    Motor,
    acceleration_at_current,
    braking,
    bridge_share,
    frequency_note,
    no_load_speed,
    operating_point,
    quiet_frequency,
    ripple_at,
    run_up_time,
    speed_at_voltage,
    time_at_current,
    time_at_voltage,
    torque_at_current,
)
from ..schema.operation.machines import Machines
from ..schema.written import number, quantity
from .documents import amount
from .search.fleet import load_fleet

if TYPE_CHECKING:
    from .store import Catalog

Document = dict[str, Any]


class OperateError(MotorfolioError):
    """What was asked of the motor can't be answered; the text says what would do."""


def machine_of(catalog: Catalog, part: str) -> tuple[str, str, Machines]:
    """Part number, maker and constants of one motor."""
    known = catalog.find(part)
    fleet = load_fleet(catalog)
    at = np.flatnonzero(fleet.ids == known.id)
    return known.part_number, known.maker, fleet.machines.take(at)


def at_work(
    catalog: Catalog, part: str, asked: Mapping[str, float | None], temperature: float
) -> Document:
    """What a motor does at a supply voltage, duty cycle, current, load torque and inertia.

    `asked` holds SI values or None: supply, duty, drop, torque, current, speed, load_inertia,
    deceleration, pwm_frequency. Raises OperateError where nothing follows from them.
    """
    part_number, maker, machines = machine_of(catalog, part)
    motor = Motor.of(machines, 0, temperature)
    for name, value in (
        ("torque constant", motor.torque_constant),
        ("resistance", motor.armature_resistance),
    ):
        if math.isnan(value):
            raise OperateError(
                f"The catalog has no {name} of {part_number}, without which nothing follows."
            )
    supply, current = asked["supply"], asked["current"]
    if supply is None and current is None:
        raise OperateError("Say what drives the motor: --supply, --current, or both.")
    if supply == 0:
        raise OperateError("--supply: 0 V is no supply; for a shorted motor give one and --duty 0.")
    document: Document = {
        "part_number": part_number,
        "maker": maker,
        "winding_temperature": amount(temperature, "°C"),
        "holds": True,
        "notes": [],
    }
    if motor.commutation != Commutation.SINUSOIDAL and np.isnan(machines.coulomb_torque[0]):
        document["notes"].append("its sheet gives no friction: taken as 0")
    if supply is not None:
        document["voltage_control"] = _voltage(motor, machines, asked, document)
    if current is not None:
        document["current_control"] = _current(motor, asked, document)
    if asked["deceleration"] is not None:
        document["braking"] = _braking(motor, asked)
    return document


def _driven_back(document: Document, load: float, most: float, at: str, friction: float) -> None:
    """Say that the load would drive the motor backward: more than `most` and friction hold it."""
    document["holds"] = False
    load_text, most_text = quantity(load, "N·m"), quantity(most, "N·m")
    if most <= 0:
        said = f"{at} gives no torque, and a load of {load_text} is more than friction holds"
        said += f" ({quantity(friction, 'N·m')})"
    else:
        times = f"{number(load / most, 3)} times the stall torque"
        said = f"a load of {load_text} is {times} of {most_text} that {at} gives"
    document["notes"].append(f"{said}: it would drive the motor backward")


def _voltage(
    motor: Motor, machines: Machines, asked: Mapping[str, float | None], whole: Document
) -> Document:
    notes = whole["notes"]
    supply, torque = asked["supply"], asked["torque"] or 0.0
    assert supply is not None
    drop, duty = asked["drop"] or 0.0, asked["duty"]
    full = 1.0 if duty is None else duty
    voltage = max(full * supply - drop, 0.0)
    speed = speed_at_voltage(motor, voltage, torque)
    point = operating_point(motor, speed, torque)
    document: Document = {
        "voltage": amount(voltage, "V"),
        "no_load_speed": amount(no_load_speed(motor, voltage), "rad/s"),
        "load_torque": amount(torque, "N·m"),
    }
    inner = motor.torque_constant * voltage / motor.armature_resistance
    stall = max(inner - motor.coulomb_torque, 0.0)
    if torque > inner + motor.coulomb_torque:
        document["torque_at_standstill"] = amount(stall, "N·m")
        _driven_back(whole, torque, stall, quantity(voltage, "V"), motor.coulomb_torque)
    else:
        document |= {
            "speed": amount(speed, "rad/s"),
            "current": amount(point.current, "A"),
            "mechanical_power": amount(point.mechanical_power, "W"),
            "electrical_power": amount(point.electrical_power, "W"),
            "copper_loss": amount(point.copper_loss, "W"),
        }
    if speed == 0 and whole["holds"]:
        notes.append("the shaft stands: at this voltage the motor does not turn against that load")
        document["current"] = amount(voltage / motor.armature_resistance, "A")
        document["electrical_power"] = amount(voltage**2 / motor.armature_resistance, "W")
        document["copper_loss"] = document["electrical_power"]
    wanted = asked["speed"]
    if wanted is not None:
        share = bridge_share(motor, wanted, torque, supply, drop)
        document["wanted_speed"] = amount(wanted, "rad/s")
        document["duty_for_speed"] = share
        document["voltage_for_speed"] = amount(operating_point(motor, wanted, torque).voltage, "V")
        if share > 1:
            notes.append("the supply does not suffice for that speed and torque")
        inertia = asked["load_inertia"] or 0.0
        if motor.commutation != Commutation.SINUSOIDAL and not math.isnan(motor.rotor_inertia):
            exact = not math.isnan(motor.armature_inductance)
            seconds = time_at_voltage(
                motor,
                voltage,
                wanted,
                load_torque=torque,
                load_inertia=inertia,
                with_inductance=exact,
            )
            document["time_to_speed"] = amount(seconds, "s")
            if math.isinf(seconds):
                notes.append("at this voltage that speed is never reached")
    document |= _ripple(motor, machines, asked, full, notes)
    return document


def _ripple(
    motor: Motor,
    machines: Machines,
    asked: Mapping[str, float | None],
    duty: float,
    notes: list[str],
) -> Document:
    supply, frequency = asked["supply"], asked["pwm_frequency"]
    assert supply is not None
    if motor.commutation == Commutation.SINUSOIDAL or math.isnan(motor.armature_inductance):
        if frequency is not None:
            notes.append(
                "current ripple is told for brushed and block-commutated motors of known inductance"
            )
        return {}
    document: Document = {}
    lasting = np.fmax(machines.nominal_current[0], machines.continuous_stall_current[0])
    if not np.isnan(lasting):
        quiet = quiet_frequency(motor, supply, float(lasting))
        document["frequency_of_tenth_ripple"] = amount(quiet, "Hz")
    if frequency is not None:
        at_duty = duty if 0 < duty < 1 else 0.5
        document["ripple_peak_to_peak"] = amount(ripple_at(motor, supply, frequency, at_duty), "A")
        document["largest_ripple"] = amount(ripple_at(motor, supply, frequency), "A")
        note = frequency_note(frequency)
        if note:
            notes.append(note.rstrip("."))
    return document


def _current(motor: Motor, asked: Mapping[str, float | None], whole: Document) -> Document:
    notes = whole["notes"]
    current, torque = asked["current"], asked["torque"] or 0.0
    assert current is not None
    inertia, speed = asked["load_inertia"] or 0.0, asked["speed"]
    document: Document = {
        "current": amount(current, "A"),
        "stall_torque": amount(torque_at_current(motor, current), "N·m"),
        "copper_loss": amount(motor.armature_resistance * current**2, "W"),
        "acceleration": amount(
            acceleration_at_current(motor, current, 0.0, torque, inertia), "rad/s²"
        ),
    }
    inner = motor.torque_constant * current
    if torque > max(inner, 0.0) + motor.coulomb_torque:
        stall = max(inner - motor.coulomb_torque, 0.0)
        _driven_back(whole, torque, stall, quantity(current, "A"), motor.coulomb_torque)
    if speed is not None:
        document["torque_at_speed"] = amount(torque_at_current(motor, current, speed), "N·m")
        document["time_to_speed"] = amount(
            time_at_current(motor, current, speed, 0.0, torque, inertia), "s"
        )
        supply = asked["supply"]
        if supply is not None:
            duty = 1.0 if asked["duty"] is None else asked["duty"]
            voltage = duty * supply - (asked["drop"] or 0.0)
            try:
                limited = run_up_time(motor, voltage, current, speed, torque, inertia)
                document["time_with_voltage_limit"] = amount(limited, "s")
            except DriveError as error:
                notes.append(str(error)[0].lower() + str(error)[1:].rstrip("."))
    return document


def _braking(motor: Motor, asked: Mapping[str, float | None]) -> Document:
    speed, deceleration = asked["speed"], asked["deceleration"]
    assert deceleration is not None
    if speed is None:
        raise OperateError("--deceleration needs the speed to brake from; give --speed.")
    found = braking(
        motor, speed, deceleration, asked["torque"] or 0.0, asked["load_inertia"] or 0.0
    )
    return {
        "deceleration": amount(deceleration, "rad/s²"),
        "current": amount(found.current, "A"),
        "voltage": amount(found.voltage, "V"),
        "returned_power": amount(found.returned_power, "W"),
        "short_circuit_current": amount(found.short_circuit_current, "A"),
    }
