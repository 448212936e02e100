"""A motor, its gear, load and heat as differential equations, integrated by scipy's solve_ivp.

Independent of the package: brushed motors by their armature circuit, sinusoidal ones in dq
coordinates with phase quantities, the load through the gear, winding and housing as two bodies.
A stiff speed controller makes the motor follow the cycle; nothing here knows the torque it needs.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from scipy.integrate import solve_ivp


@dataclass(frozen=True)
class Plant:
    """One motor in one application, SI; `sinusoidal` motors are given by terminal values, too."""

    Km: float
    Ra: float
    La: float
    J: float
    Tc: float
    b: float
    p: int
    sinusoidal: bool
    beta: float
    Rth1: float
    Rth2: float
    tau_w: float
    tau_h: float
    ratio: float
    JL: float
    eta: float
    Jg: float
    ambient: float
    time: np.ndarray
    speed: np.ndarray
    torque: np.ndarray
    frozen: float | None = None  # winding temperature held there, if any

    def rates(self, k: int):
        """d/dt of i_q, i_d, motor speed, winding and housing temperature, ∫i² dt in interval k.

        Plain floats: most of the time goes into these calls.
        """
        t0, step = float(self.time[k]), float(self.time[k + 1] - self.time[k])
        speed, torque = float(self.speed[k]), float(self.torque[k])
        aL = float(self.speed[k + 1] - self.speed[k]) / step
        slope = float(self.torque[k + 1] - self.torque[k]) / step
        fast, slow = 1e-5 * step, 1e-4 * step
        ratio, eta, sinusoidal, frozen = self.ratio, self.eta, self.sinusoidal, self.frozen
        Km, Ra, La, Tc, b, beta, p = self.Km, self.Ra, self.La, self.Tc, self.b, self.beta, self.p
        Rth1, Rth2, ambient = self.Rth1, self.Rth2, self.ambient
        C1, C2 = self.tau_w / Rth1, self.tau_h / Rth2
        rotor, JL = self.J + self.Jg, self.JL

        def rates(t: float, y: np.ndarray) -> list[float]:
            iq, i_d, w, Tw, Th, _ = y.tolist()
            if frozen is not None:
                Tw = frozen
            wL, Text = speed + aL * (t - t0), torque + slope * (t - t0)
            flux = Km * (1 + beta * (Tw - 25))
            warm = Ra * (234.5 + Tw) / (234.5 + 25)
            # Directions are those of the motion that is asked for.
            power = (Text + JL * aL) * wL
            g = 1 / eta if power > 0 else eta if power < 0 else 1.0
            rubbing = Tc * ((wL > 0) - (wL < 0)) + b * w
            inertia = rotor + JL * g / ratio**2
            if sinusoidal:
                psi = flux / (math.sqrt(3) * p)
                per_ampere = 1.5 * p * psi
                R, L, we = warm / 2, La / 2, p * w
                wanted = inertia / (per_ampere * slow) * (ratio * wL - w)
                vd = R * i_d - we * L * iq - L * i_d / fast
                vq = R * iq + we * (L * i_d + psi) + L * (wanted - iq) / fast
                diq = (vq - R * iq - we * (L * i_d + psi)) / L
                did = (vd - R * i_d + we * L * iq) / L
                copper = 1.5 * R * (iq * iq + i_d * i_d)
            else:
                per_ampere = flux
                wanted = inertia / (per_ampere * slow) * (ratio * wL - w)
                v = warm * iq + flux * w + La * (wanted - iq) / fast
                diq = (v - warm * iq - flux * w) / La
                did = 0.0
                copper = warm * iq * iq
            dw = (per_ampere * iq - rubbing - Text * g / ratio) / inertia
            dTw = (copper - (Tw - Th) / Rth1) / C1
            dTh = ((Tw - Th) / Rth1 - (Th - ambient) / Rth2 + rubbing * w) / C2
            return [diq, did, dw, dTw, dTh, iq * iq + i_d * i_d]

        return rates

    def voltage(self, y: np.ndarray) -> float:
        """Terminal voltage at settled currents: of the brushes, or line to line at its peak."""
        Tw = y[3] if self.frozen is None else self.frozen
        flux, warm = 1 + self.beta * (Tw - 25), (234.5 + Tw) / (234.5 + 25)
        iq, i_d, w = y[:3]
        if not self.sinusoidal:
            return abs(self.Ra * warm * iq + self.Km * flux * w)
        R, L, we = self.Ra * warm / 2, self.La / 2, self.p * w
        psi = self.Km * flux / (np.sqrt(3) * self.p)
        vd, vq = R * i_d - we * L * iq, R * iq + we * (L * i_d + psi)
        return float(np.sqrt(3) * np.hypot(vd, vq))

    @property
    def armature(self) -> float:
        """Armature amperes per ampere of `i_q`."""
        return np.sqrt(3) / 2 if self.sinusoidal else 1.0

    def period(self, y0: np.ndarray) -> tuple[np.ndarray, dict[str, float]]:
        """The state after one period, and what was largest in it."""
        y = np.array(y0, float)
        y[5] = 0.0
        seen = {"current": 0.0, "voltage": 0.0, "temperature": -np.inf}
        for k in range(len(self.time) - 1):
            t0, t1 = self.time[k], self.time[k + 1]
            if t1 == t0:
                continue
            settled = np.linspace(t0 + 2e-3 * (t1 - t0), t1, 120)
            run = solve_ivp(
                self.rates(k), (t0, t1), y, "LSODA", t_eval=settled, rtol=1e-6, atol=1e-7
            )
            assert run.success, run.message
            y = run.y[:, -1]
            seen["current"] = max(seen["current"], self.armature * np.abs(run.y[0]).max())
            seen["voltage"] = max(seen["voltage"], *(self.voltage(s) for s in run.y.T))
            seen["temperature"] = max(seen["temperature"], run.y[3].max())
        duration = self.time[-1] - self.time[0]
        seen["rms"] = self.armature * np.sqrt(y[5] / duration)
        return y, seen

    def at(self, temperature: float) -> dict[str, float]:
        """One settled period with the winding held at a temperature."""
        held = replace(self, frozen=temperature)
        w = self.ratio * self.speed[0]
        y, _ = held.period(np.array([0.0, 0.0, w, temperature, temperature, 0.0]))
        return held.period(y)[1]

    def steady(self, Tw: float, Th: float) -> dict[str, float]:
        """The periodic state, by shooting for both temperatures from a first guess."""
        y = np.array([0.0, 0.0, self.ratio * self.speed[0], Tw, Th, 0.0])
        y, _ = self.period(y)
        y[3:5] = Tw, Th
        for _ in range(12):
            end, seen = self.period(y)
            miss = end[3:5] - y[3:5]
            if np.abs(miss).max() < 2e-4 * max(10.0, y[3] - self.ambient) * self._slack:
                return seen
            slopes = np.empty((2, 2))
            for j, delta in enumerate((1.0, 1.0)):
                moved = y.copy()
                moved[3 + j] += delta
                slopes[:, j] = (self.period(moved)[0][3:5] - end[3:5]) / delta
            y = end.copy()
            y[3:5] -= miss  # back to where this period began
            y[3:5] += np.linalg.solve(np.eye(2) - slopes, miss)
        raise AssertionError("no periodic state was found")

    @property
    def _slack(self) -> float:
        """In a cycle short against the housing even a far state moves little."""
        return min(1.0, (self.time[-1] - self.time[0]) / (self.tau_w + self.tau_h))
