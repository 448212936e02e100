"""Servo sheet or dc sheet: which of the two habits of naming a table follows."""

import re

from ....schema.units.read import unit_of
from ..headings.lexicon import symbol_form
from ..model import Field

_FEEDBACK = 0.7
"""The weight of an encoder; small dc motors have one too, so that it never decides alone."""


def family_of(fields: list[Field]) -> str | None:
    """ "servo" or "dc" by headings that only one of them has, None where they balance.

    A servo sheet speaks of rms amperes, standstill, peak torque and poles; a dc sheet of the
    no-load speed, stall and regulation (common practice, no source).
    """
    servo = dc = 0.0
    for f in fields:
        keys = {k for p in f.label.names if p.score >= 0.9 for k in p.keys}
        generics = {(f.section, p.generic) for p in f.label.names if p.generic}
        symbols = {symbol_form(s) for s in f.label.symbols}
        symbols |= {s[0] + s[1:].replace("o", "0").replace("O", "0") for s in symbols if s}
        marks = {m for u in f.units if (unit := unit_of(u)) for m in unit.marks}
        cells = " ".join(f.texts[:3])
        if (
            "rms" in marks
            or f.label.convention.current == "rms"
            or re.search(r"\d\s*A\s?rms", cells)
        ):
            servo += 2
        for key in keys:
            if key in ("continuous_stall_torque", "continuous_stall_current") and len(keys) == 1:
                servo += 2
            elif key in ("peak_torque", "peak_current", "mains_voltage", "rated_temperature_rise"):
                servo += 0.7
            elif key in ("no_load_speed", "no_load_current", "speed_torque_gradient"):
                dc += 2
            elif (key in ("speed_constant", "maximum_efficiency") and len(keys) == 1) or (
                key in ("stall_torque", "stall_current") and len(keys) == 1
            ):
                dc += 1
        if symbols & {
            "Mmax",
            "Imax",
            "M0max",
            "KTrms",
            "I0rms",
            "Md0",
            "Id0",
            "Tcs",
            "Ics",
            "Tpk",
            "Ipk",
        }:
            servo += 1
        if "M0" in symbols or "T0" in symbols:
            servo += 1.5
        if symbols & {"n0", "MH", "IA", "N0", "Δn/ΔM"}:
            dc += 1.5
        if any(s == "no_load" for s, _ in generics):
            dc += 1.5
        if re.search(r"resolver|encoder|feedback|geber|codeur|编码器|エンコーダ", f.heading, re.I):
            servo += _FEEDBACK
    if servo > max(dc, _FEEDBACK):
        return "servo"
    return "dc" if dc > servo else None
