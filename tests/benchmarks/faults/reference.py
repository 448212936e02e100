"""An independent fit that knows the true scatter: what a planted fault lets anyone find out.

Unknowns are the logarithms of the motor's constants; every published figure is predicted from
them by ``sheets.published`` (differentiated numerically) and weighted with the scatter that the
generator drew from. *Detectable*: leaving the faulty figures out lowers χ² by more than 12 and
moves them by more than 5 %. *Identifiable*: leaving out any other single figure is worse by
more than 25.
"""

import math
from dataclasses import dataclass, replace

import numpy as np

from .mistakes import Planted
from .sheets import EXACT, SCATTER, Motor, Sheet, published

FREE = {
    "dc": ["Km", "Ra", "La", "J", "I0", "IN", "Rth1", "Rth2"],
    "sine": ["Km", "Ra", "La", "J", "I0", "IN", "n_N", "Ics", "Ipk", "saturation"],
}


@dataclass
class Verdict:
    """What can be found out about a planted fault."""

    detectable: bool
    identifiable: bool


def _rows(sheet: Sheet, i: int) -> tuple[list[str], np.ndarray, np.ndarray]:
    keys = [k for k in sheet.keys if k not in EXACT]
    y = np.array([math.log(max(sheet.si(k, i), 1e-30)) for k in keys])
    sd = []
    for k in keys:
        text = sheet.printed[k][i]
        step = 10.0 ** -(len(text.partition(".")[2])) if "." in text else 1.0
        half = 0.5 * step * sheet.units[k][1] / max(sheet.si(k, i), 1e-30)
        scatter = SCATTER.get(k, 0.0) if sheet.scattered else 0.0
        if k in ("rated_power", "maximum_power") and sheet.scattered:
            scatter = 0.035
        sd.append(math.hypot(min(half, 0.3) / math.sqrt(3), scatter, 1e-4))
    return keys, y, np.array(sd)


def _fit(sheet: Sheet, m: Motor, keys: list[str], y: np.ndarray, sd: np.ndarray,
         out: set[str]) -> tuple[float, dict[str, float]]:  # fmt: skip
    """Least squares without the figures in ``out``: χ², and the predictions of those left out."""
    names = FREE["sine" if sheet.kind == "sinusoidal" else "dc"]
    prior = {"I0": 1.0, "saturation": 0.05}
    x0 = np.array([math.log(getattr(m, n)) for n in names])
    x = x0.copy()

    def predict(v: np.ndarray) -> np.ndarray:
        motor = replace(m, **{n: math.exp(a) for n, a in zip(names, v, strict=True)})
        f = published(motor, sheet)
        return np.array([math.log(max(f[k], 1e-30)) for k in keys])

    use = np.array([k not in out for k in keys])
    p_sd = np.array([prior.get(n, 3.0) for n in names])
    for _ in range(10):  # far enough for a factor of a million, 1.5 in the logarithm a step
        base = predict(x)
        jac = np.empty((len(keys), len(x)))
        for c in range(len(x)):
            step = x.copy()
            step[c] += 1e-5
            jac[:, c] = (predict(step) - base) / 1e-5
        a = np.vstack([jac[use] / sd[use, None], np.diag(1 / p_sd)])
        b = np.concatenate([(y - base)[use] / sd[use], (x0 - x) / p_sd])
        dx = np.linalg.lstsq(a, b, rcond=None)[0]
        x = x + np.clip(dx, -1.5, 1.5)
    base = predict(x)
    chi2 = float((((y - base) / sd)[use] ** 2).sum() + (((x - x0) / p_sd) ** 2).sum())
    return chi2, dict(zip(keys, base, strict=True))


def judge(sheet: Sheet, planted: Planted) -> Verdict:
    """Whether this fault can be detected, and pinned to its figure, from the motor's own row."""
    i = planted.motor
    m = sheet.motors[i]
    if planted.keys == ("pole_pairs",):
        return Verdict(True, False)
    keys, y, sd = _rows(sheet, i)
    full, _ = _fit(sheet, m, keys, y, sd, set())
    wrong = set(planted.keys)
    without, implied = _fit(sheet, m, keys, y, sd, wrong)
    moved = max((abs(y[keys.index(k)] - implied[k]) for k in wrong if k in implied), default=0.0)
    detectable = full - without > 12 and moved > math.log(1.05)
    identifiable = detectable
    if detectable:
        others = [_fit(sheet, m, keys, y, sd, {k})[0] for k in keys if k not in wrong]
        identifiable = min(others, default=math.inf) - without > 25
    return Verdict(detectable, identifiable)
