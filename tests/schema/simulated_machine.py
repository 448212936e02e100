"""A motor, its gear, load and heat as differential equations, integrated by scipy's solve_ivp.

Independent of the package: brushed motors by their armature circuit, sinusoidal ones in dq
coordinates with phase quantities, the load through the gear, winding and housing as two bodies.
A stiff speed controller makes the motor follow the cycle; nothing here knows the torque it needs.
"""

from __future__ import annotations

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

    def load(self, t: float, k: int) -> tuple[float, float, float]:
        """Load speed, acceleration and external torque at a time of row interval k."""
        t0, t1 = self.time[k], self.time[k + 1]
        s = (t - t0) / (t1 - t0)
        a = (self.speed[k + 1] - self.speed[k]) / (t1 - t0)
        w = self.speed[k] + (self.speed[k + 1] - self.speed[k]) * s
        return w, a, self.torque[k] + (self.torque[k + 1] - self.torque[k]) * s

    def rates(self, t: float, y: np.ndarray, k: int) -> np.ndarray:
        """d/dt of i_q, i_d, motor speed, winding and housing temperature, ∫i² dt."""
        iq, i_d, w, Tw, Th, _ = y
        if self.frozen is not None:
            Tw = self.frozen
        step = self.time[k + 1] - self.time[k]
        fast, slow = 1e-5 * step, 1e-4 * step
        wL, aL, Text = self.load(t, k)
        flux = 1 + self.beta * (Tw - 25)
        warm = (234.5 + Tw) / (234.5 + 25)
        # Directions are those of the motion that is asked for.
        TL = Text + self.JL * aL
        power = TL * wL
        g = 1 / self.eta if power > 0 else self.eta if power < 0 else 1.0
        rubbing = self.Tc * np.sign(wL) + self.b * w
        inertia = self.J + self.Jg + self.JL * g / self.ratio**2
        if self.sinusoidal:
            psi = self.Km * flux / (np.sqrt(3) * self.p)
            shaft = 1.5 * self.p * psi * iq
            per_ampere = 1.5 * self.p * psi
            R = self.Ra * warm / 2
            copper = 1.5 * R * (iq**2 + i_d**2)
        else:
            shaft = self.Km * flux * iq
            per_ampere = self.Km * flux
            copper = self.Ra * warm * iq**2
        wanted = inertia / (per_ampere * slow) * (self.ratio * wL - w)
        vd, vq = self.volts(y, wanted, fast, flux, warm)
        if self.sinusoidal:
            L, we = self.La / 2, self.p * w
            psi = self.Km * flux / (np.sqrt(3) * self.p)
            diq = (vq - R * iq - we * (L * i_d + psi)) / L
            did = (vd - R * i_d + we * L * iq) / L
        else:
            diq = (vq - self.Ra * warm * iq - self.Km * flux * w) / self.La
            did = 0.0
        dw = (shaft - rubbing - Text * g / self.ratio) / inertia
        C1, C2 = self.tau_w / self.Rth1, self.tau_h / self.Rth2
        dTw = (copper - (Tw - Th) / self.Rth1) / C1
        dTh = ((Tw - Th) / self.Rth1 - (Th - self.ambient) / self.Rth2 + rubbing * w) / C2
        return np.array([diq, did, dw, dTw, dTh, iq**2 + i_d**2])

    def volts(
        self, y: np.ndarray, wanted: float, fast: float, flux: float, warm: float
    ) -> tuple[float, float]:
        """Voltages of a current controller with the time constant `fast`."""
        iq, i_d, w = y[:3]
        if not self.sinusoidal:
            return 0.0, self.Ra * warm * iq + self.Km * flux * w + self.La * (wanted - iq) / fast
        R, L, we = self.Ra * warm / 2, self.La / 2, self.p * w
        psi = self.Km * flux / (np.sqrt(3) * self.p)
        return (
            R * i_d - we * L * iq - L * i_d / fast,
            R * iq + we * (L * i_d + psi) + L * (wanted - iq) / fast,
        )

    def voltage(self, y: np.ndarray) -> float:
        """Terminal voltage at settled currents: of the brushes, or line to line at its peak."""
        Tw = y[3] if self.frozen is None else self.frozen
        flux, warm = 1 + self.beta * (Tw - 25), (234.5 + Tw) / (234.5 + 25)
        vd, vq = self.volts(y, y[0], 1.0, flux, warm)
        return float(np.hypot(vd, vq) * (np.sqrt(3) if self.sinusoidal else 1.0))

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
                self.rates, (t0, t1), y, "LSODA", t_eval=settled, args=(k,), rtol=1e-6, atol=1e-7
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
