// A motor in a requirement, judged as the program's Python does: heat, current and voltage at work.
// SI units, °C; NaN is unknown. Every number comes out of the page's data.
"use strict";
const judging = (() => {
  const T0 = 25, ALPHA = 1 / (234.5 + T0), SHORT_CYCLE = 1e-3;
  const MODULATION = 2 / Math.sqrt(3), CUBIC = 4 * Math.sqrt(3) / Math.PI;
  const QUARTIC = 9 / 8 * (1.5 - 9 * Math.sqrt(3) / (8 * Math.PI));
  const NODES = [0.046910077030668, 0.2307653449471585, 0.5, 0.7692346550528415, 0.953089922969332];
  const WEIGHTS = [0.1184634425280945, 0.2393143352496833, 0.2844444444444444, 0.2393143352496833,
    0.1184634425280945];
  const AMPERES = {dc: [1, 1, 1], peak: [1, 1, Math.sqrt(3) / 2], rms: [1, Math.sqrt(1.5), Math.sqrt(1.5)]};
  const SINUSOIDAL = 2;

  const zero = x => Number.isNaN(x) ? 0 : x;
  const copper = T => 1 + ALPHA * (T - T0);
  const flux = (T, beta) => 1 + zero(beta) * (T - T0);
  const known = (a, b) => Number.isNaN(a) ? b : Number.isNaN(b) ? a : Math.min(a, b);

  // Lowest root of T − ambient − fixed = (1 + α·θ)·(rise/(1 + β·θ)² + ripple), or thermal runaway.
  function steady(ambient, rise, ripple, fixed, alpha, beta) {
    const floor = ambient + fixed - T0;
    let t = floor;
    if (!Number.isFinite(t + rise + ripple + alpha + beta)) return {T: NaN, lost: false};
    for (let i = 0; i < 80; i++) {
      const f = 1 + beta * t, warm = 1 + alpha * t, heat = rise / (f * f);
      const residual = t - floor - warm * (heat + ripple);
      const slope = 1 - alpha * (heat + ripple) + 2 * beta * warm * heat / f;
      if (residual < 0 && (slope <= 0 || f <= 0) || f <= 0) return {T: NaN, lost: true};
      const step = -residual / slope;
      t += step;
      if (Math.abs(step) <= 1e-9 * (1 + Math.abs(t))) break;
    }
    return {T: t + T0, lost: false};
  }

  // The cycle at the motor: torque with friction, speed, shaft torque at the ends of each piece.
  function atMotor(m, d) {
    const {duration, basis, stretch} = d.pieces[m.pieces], N = m.ratio;
    const accelerates = basis.some(ends => ends[0][1] || ends[1][1]);
    const J = accelerates ? m.rotor_inertia + m.gear_inertia : 0;
    const Tc = zero(m.coulomb_torque), b = zero(m.viscous_damping) * N;
    const torque = [], shaft = [], speed = [];
    let period = 0, square = 0, distance = 0, speedSquare = 0;
    basis.forEach((ends, p) => {
      const s = ends.map(e => e[0] / N + J * N * e[1]);
      const t = ends.map((e, i) => s[i] + Tc * e[2] + b * e[3]);
      const w = ends.map(e => e[3] * N);
      torque.push(t); shaft.push(s); speed.push(w);
      const h = duration[p];
      period += h;
      square += h * (t[0] * t[0] + t[0] * t[1] + t[1] * t[1]) / 3;
      speedSquare += h * (w[0] * w[0] + w[0] * w[1] + w[1] * w[1]) / 3;
      distance += h * (Math.abs(w[0]) + Math.abs(w[1])) / 2;
    });
    const first = JSON.stringify(basis[0][0]);
    return {
      duration, basis, stretch, torque, shaft, speed, period, J, Tc, b: zero(m.viscous_damping),
      square: square / period, rmsSpeed: Math.sqrt(speedSquare / period),
      friction: Tc * distance / period + zero(m.viscous_damping) * speedSquare / period,
      constant: basis.every(ends => ends.every(e => JSON.stringify(e) === first)),
      moves: speedSquare > 0,
    };
  }

  // Rise in K for one A², what fixed it, and what may be granted: by thermal resistances, else by
  // the continuous current that the sheet grants.
  function route(m, d, s, rmsSpeed) {
    const own = d.mounting, inner = m.thermal_resistance_winding_housing;
    const outer = own === null ? m.thermal_resistance_housing_ambient : own;
    let total = inner + outer;
    if (own === null && Number.isNaN(total)) total = m.thermal_resistance;
    const rest = total - inner > 0 ? total - inner : total;
    const balance = !Number.isNaN(total);
    const rated = Number.isNaN(m.rating_ambient) ? T0 : m.rating_ambient;
    let limit = m.maximum_winding_temperature;
    if (Number.isNaN(limit) && balance) limit = rated + m.rated_temperature_rise;
    const lasting = own === null ? lastingCurrent(m, rmsSpeed) : NaN;
    const allowed = limit > rated ? limit - rated : NaN;
    return {
      inner, outer, balance, limit, lasting, rated,
      perSquare: balance ? total * m.armature_resistance : allowed / (lasting * lasting),
      path: balance ? (Number.isNaN(outer) ? rest : outer) : 0,
      alpha: balance ? ALPHA : 0, beta: zero(m.magnet_coefficient),
      granted: (limit - s.ambient) * d.permissible_rise,
      plain: !balance && Number.isNaN(limit) && s.ambient <= rated,
    };
  }

  function lastingCurrent(m, rmsSpeed) {
    const nominal = m.nominal_current, stall = m.continuous_stall_current;
    if (Number.isNaN(nominal)) return stall;
    if (Number.isNaN(stall)) return nominal;
    const line = stall + (nominal - stall) * rmsSpeed / m.nominal_speed;
    if (Number.isNaN(line)) return Math.min(nominal, stall);
    return Math.min(Math.max(line, 0), Math.max(nominal, stall));
  }

  function used(r, T, lost, square, coldRipple, d, ambient) {
    if (r.plain) {
      const f = flux(ambient, r.beta);
      return (square / (f * f) + coldRipple) / (r.lasting * r.lasting) / d.permissible_rise;
    }
    if (lost || Number.isNaN(r.limit)) return NaN;
    return r.granted > 0 ? (T - ambient) / r.granted : Infinity;
  }

  function heating(m, c, d, s) {
    const r = route(m, d, s, c.rmsSpeed), square = c.square / (m.torque_constant ** 2);
    const fixed = r.balance ? r.path * c.friction : 0;
    const solve = ripple =>
      steady(s.ambient, r.perSquare * square, r.perSquare * ripple, fixed, r.alpha, r.beta);
    let cold = 0, hot = 0, pieces = null, found;
    if (d.pwm_frequency === null || s.supply === null) {
      found = solve(0);
    } else {
      const mean = list => list.reduce((sum, x, p) => sum + x * c.duration[p], 0) / c.period;
      pieces = ripple(m, c, d, s, s.ambient);
      cold = hot = mean(pieces);
      found = solve(hot);
      for (let round = 0; round < 2; round++) {
        pieces = ripple(m, c, d, s, Number.isNaN(found.T) ? s.ambient : found.T);
        hot = mean(pieces);
        found = solve(hot);
      }
    }
    let {T, lost} = found;
    const tw = m.thermal_time_constant_winding, th = m.thermal_time_constant_housing;
    const ownOuter = m.thermal_resistance_housing_ambient;
    if (!c.constant && c.period > SHORT_CYCLE * tw &&
        Number.isFinite(T + r.inner + r.outer + ownOuter + th)) {
      const body = {toHousing: r.inner, toAmbient: r.outer, C1: tw / r.inner, C2: th / ownOuter};
      ({T, lost} = periodic(m, c, body, s.ambient, pieces, T));
    }
    return {T, lost, use: used(r, T, lost, square, cold, d, s.ambient), cold, hot};
  }

  function twoLevel(share, bus, R, L, f) {
    const D = Math.min(Math.max(share, 0), 1), x = R / (f * L);
    const swing = Math.expm1(-D * x) * Math.expm1(-(1 - D) * x) / -Math.expm1(-x);
    const square = x > 1e-3 ? D * (1 - D) - swing / x : swing * swing / 12;
    return (bus / R) ** 2 * Math.max(square, 0);
  }

  // Mean square of the PWM ripple current in each piece of the cycle.
  function ripple(m, c, d, s, T) {
    const L = m.armature_inductance, R = m.armature_resistance * copper(T);
    const K = m.torque_constant * flux(T, m.magnet_coefficient), f = d.pwm_frequency;
    const bus = s.supply * d.nominal_over_lowest;
    if (Number.isNaN(L)) return c.duration.map(() => 0);
    return c.torque.map((t, p) => {
      const w = c.speed[p];
      let sum = 0;
      if (m.commutation === SINUSOIDAL) {
        const X = zero(m.pole_pairs) * L;
        NODES.forEach((node, i) => {
          const I = (t[0] + (t[1] - t[0]) * node) / K, speed = w[0] + (w[1] - w[0]) * node;
          const U = Math.hypot(R * I + K * speed, X * speed * I);
          const M = Math.min(MODULATION * U / bus, MODULATION);
          sum += WEIGHTS[i] * (bus / (f * L)) ** 2 / 96 * M * M * (1.5 + M * (QUARTIC * M - CUBIC));
        });
        return zero(sum);
      }
      const u0 = t[0] / K * R + w[0] * K, u1 = t[1] / K * R + w[1] * K;
      const turn = u0 * u1 < 0 ? u0 / (u0 - u1) : 0;
      const at = share => twoLevel(Math.abs(u0 + (u1 - u0) * share) / bus, bus, R, L, f);
      NODES.forEach((node, i) => {
        sum += WEIGHTS[i] * (turn * at(turn * node) + (1 - turn) * at(turn + (1 - turn) * node));
      });
      return zero(sum);
    });
  }

  function phi(z) {
    if (Math.abs(z) < 0.1) {
      const third = 1 / 6 + z * (1 / 24 + z * (1 / 120 + z * (1 / 720 + z * (1 / 5040 + z / 40320))));
      const second = 0.5 + z * third, first = 1 + z * second;
      return [1 + z * first, first, second, third];
    }
    const first = Math.expm1(z) / z, second = (first - 1) / z, third = (second - 0.5) / z;
    return [1 + z * first, first, second, third];
  }

  // Peak winding temperature of the periodic state of winding and housing: each piece is cut, a
  // cut is a linear system with a quadratic input, and the loss follows the temperature's chord.
  function periodic(m, c, body, ambient, ripples, start) {
    const tau = body.C1 * body.toHousing, cuts = [], K = m.torque_constant;
    c.duration.forEach((duration, p) => {
      const length = duration / tau;
      const n = length <= 0.1 ? 1 : length <= 0.5 ? 2 : length <= 2 ? 4 : length <= 8 ? 8 : 16;
      const [t0, t1] = c.torque[p], [w0, w1] = c.speed[p], ends = c.basis[p];
      const rub = ends.map((e, i) => c.Tc * e[2] + c.b * c.speed[p][i]);
      for (let i = 0; i < n; i++) {
        const a = (i / n) ** 2, b = ((i + 1) / n) ** 2;
        const i0 = (t0 + (t1 - t0) * a) / K, di = (t1 - t0) * (b - a) / K;
        const f0 = rub[0] + (rub[1] - rub[0]) * a, df = (rub[1] - rub[0]) * (b - a);
        const v0 = w0 + (w1 - w0) * a, dv = (w1 - w0) * (b - a), R = m.armature_resistance;
        cuts.push({
          h: duration * (b - a), loss: [R * i0 * i0, 2 * R * i0 * di, R * di * di],
          rubbing: [f0 * v0, f0 * dv + df * v0, df * dv],
          ripple: ripples === null ? 0 : R * ripples[p],
        });
      }
    });
    let nodes = new Array(cuts.length + 1).fill(start - T0);
    for (let round = 0; round < 40; round++) {
      const found = onePeriod(cuts, body, ambient - T0, zero(m.magnet_coefficient), nodes);
      if (found === null) return {T: NaN, lost: true};
      let change = 0, largest = 0;
      found.winding.forEach((x, i) => {
        change = Math.max(change, Math.abs(x - nodes[i]));
        largest = Math.max(largest, Math.abs(x));
      });
      nodes = found.winding;
      if (change <= 1e-5 * (1 + largest)) return {T: found.highest + T0, lost: false};
    }
    return {T: NaN, lost: true};
  }

  function onePeriod(cuts, body, ambient, beta, nodes) {
    const {toHousing, toAmbient, C1, C2} = body, short = 2 * C1 * toHousing;
    const gain = x => (1 + ALPHA * x) / (1 + beta * x) ** 2;
    const steps = cuts.map((cut, n) => {
      const low = nodes[n], high = nodes[n + 1], middle = (low + high) / 2, gap = high - low;
      const f = 1 + beta * middle, h = cut.h, steep = Math.abs(gap) > 1e-3;
      const tangent = (ALPHA * f - 2 * beta * (1 + ALPHA * middle)) / f ** 3;
      const chord = steep ? (gain(high) - gain(low)) / gap : tangent;
      const atMiddle = steep ? (gain(low) + gain(high)) / 2 : gain(middle);
      const base = [cut.loss[0] + cut.ripple * f * f, cut.loss[1], cut.loss[2]];
      const mean = base[0] + base[1] / 2 + base[2] / 3;
      const a11 = (mean * chord - 1 / toHousing) / C1, a12 = 1 / (toHousing * C1);
      const a21 = 1 / (toHousing * C2), a22 = -a21 - 1 / (toAmbient * C2);
      const winding = base.map(x => x * atMiddle / C1);
      winding[0] -= mean * chord * middle / C1;
      if (h < short) {
        const sag = mean * (atMiddle - gain(middle)) / C1;
        const along = (base[1] + base[2]) * chord * gap / C1;
        winding[0] += along / 4; winding[1] += -along - 4 * sag; winding[2] += along + 4 * sag;
      }
      const housing = cut.rubbing.map(x => x / C2);
      housing[0] += ambient / (toAmbient * C2);
      const half = (a11 + a22) / 2, spread = Math.sqrt(((a11 - a22) / 2) ** 2 + a12 * a21);
      const e = [0, 0, 0, 0], forced = [0, 0];
      for (const sign of [1, -1]) {
        const root = half + sign * spread;
        const p11 = sign * (a11 - half + sign * spread) / (2 * spread), p12 = sign * a12 / (2 * spread);
        const p21 = sign * a21 / (2 * spread), p22 = sign * (a22 - half + sign * spread) / (2 * spread);
        const [f0, f1, f2, f3] = phi(root * h);
        e[0] += f0 * p11; e[1] += f0 * p12; e[2] += f0 * p21; e[3] += f0 * p22;
        const w = h * (f1 * winding[0] + f2 * winding[1] + 2 * f3 * winding[2]);
        const g = h * (f1 * housing[0] + f2 * housing[1] + 2 * f3 * housing[2]);
        forced[0] += p11 * w + p12 * g; forced[1] += p21 * w + p22 * g;
      }
      return {e, forced, base};
    });
    let m11 = 1, m12 = 0, m21 = 0, m22 = 1, u = 0, v = 0;
    for (const {e: [b11, b12, b21, b22], forced} of steps) {
      [m11, m21] = [b11 * m11 + b12 * m21, b21 * m11 + b22 * m21];
      [m12, m22] = [b11 * m12 + b12 * m22, b21 * m12 + b22 * m22];
      [u, v] = [b11 * u + b12 * v + forced[0], b21 * u + b22 * v + forced[1]];
    }
    const determinant = (1 - m11) * (1 - m22) - m12 * m21;
    if (!(determinant > 0 && m11 < 1 && m22 < 1)) return null;
    let x = ((1 - m22) * u + m12 * v) / determinant, y = (m21 * u + (1 - m11) * v) / determinant;
    const winding = [x], shell = [y];
    for (const {e: [b11, b12, b21, b22], forced} of steps) {
      [x, y] = [b11 * x + b12 * y + forced[0], b21 * x + b22 * y + forced[1]];
      winding.push(x); shell.push(y);
    }
    if (!winding.every(t => Number.isFinite(t) && 1 + beta * t > 0.05)) return null;
    let highest = Math.max(...winding);
    steps.forEach((step, n) => {
      const h = cuts[n].h, low = winding[n], high = winding[n + 1];
      const slope = (heat, t, s) => h * (heat * gain(t) - (t - s) / toHousing) / C1;
      const loss = cuts[n].loss;
      const base = [loss[0] + cuts[n].ripple * (1 + beta * (nodes[n] + nodes[n + 1]) / 2) ** 2];
      const rising = slope(base[0], low, shell[n]);
      const falling = slope(base[0] + loss[1] + loss[2], high, shell[n + 1]);
      if (rising > 0 && falling < 0 && h < short) {
        const s = rising / (rising - falling);
        const cubic = low + s * s * (3 - 2 * s) * (high - low) +
          s * (1 - s) * ((1 - s) * rising - s * falling);
        highest = Math.max(highest, cubic);
      }
    });
    return {winding, highest};
  }

  const reactive = m => m.commutation === SINUSOIDAL && !Number.isNaN(m.pole_pairs * m.armature_inductance);
  const voltageKnown = m => m.commutation !== SINUSOIDAL || reactive(m);

  // Largest |U| over the cycle at one temperature; a sinusoidal motor's may lie inside a piece.
  function peakVoltage(m, c, T) {
    const R = m.armature_resistance * copper(T), K = m.torque_constant * flux(T, m.magnet_coefficient);
    const X = reactive(m) ? m.pole_pairs * m.armature_inductance : 0;
    let largest = 0;
    c.torque.forEach(([t0, t1], p) => {
      const [w0, w1] = c.speed[p];
      const at = s => {
        const I = (t0 + (t1 - t0) * s) / K, w = w0 + (w1 - w0) * s;
        return Math.hypot(R * I + K * w, X * I * w);
      };
      largest = Math.max(largest, at(0), at(1));
      if (!X || w0 === w1) return;
      let best = 0, top = 0;
      for (let i = 1; i < 32; i++) if (at(i / 32) > top) { best = i / 32; top = at(best); }
      let a = best - 1 / 32, b = best + 1 / 32;
      for (let i = 0; i < 40; i++) {
        const l = a + (b - a) * 0.382, r = b - (b - a) * 0.382;
        if (at(l) < at(r)) a = l; else b = r;
      }
      largest = Math.max(largest, at((a + b) / 2));
    });
    return largest;
  }

  // Largest power drawn from the supply, without the ripple's loss.
  function peakPower(m, c, T, drop) {
    const K = m.torque_constant * flux(T, m.magnet_coefficient), R = m.armature_resistance * copper(T);
    let most = 0;
    c.torque.forEach(([t0, t1], p) => {
      const [w0, w1] = c.speed[p], i0 = t0 / K, i1 = t1 / K;
      const turn = i0 * i1 < 0 ? i0 / (i0 - i1) : 1;
      for (const [a, b] of [[0, turn], [turn, 1]]) {
        if (b <= a) continue;
        const sign = Math.sign(i0 + (i1 - i0) * (a + b) / 2);
        const at = s => {
          const i = i0 + (i1 - i0) * s, w = w0 + (w1 - w0) * s;
          return R * i * i + K * w * i + drop * sign * i;
        };
        const p0 = at(a), pm = at((a + b) / 2), p1 = at(b);
        const q = 2 * (p0 + p1 - 2 * pm), l = 4 * pm - 3 * p0 - p1;
        const s = q ? Math.min(Math.max(-l / (2 * q), 0), 1) : 0;
        most = Math.max(most, p0, p1, p0 + s * (l + s * q));
      }
    });
    return most;
  }

  const available = (d, s) => s.supply === null ? null : d.max_duty * s.supply - d.bridge_drop;

  function once(m, d, s) {
    const c = atMotor(m, d), heat = heating(m, c, d, s), Km = m.torque_constant;
    const hot = Number.isNaN(heat.T) ? s.ambient : heat.T;
    const fc = flux(s.ambient, m.magnet_coefficient), fh = flux(hot, m.magnet_coefficient);
    const rms = Math.sqrt(Math.max(c.square / (Km * fc) ** 2 + heat.cold, c.square / (Km * fh) ** 2 + heat.hot));
    const most = list => Math.max(...list.flat().map(Math.abs));
    const peak = most(c.torque) / (Km * Math.min(fc, fh)), speed = most(c.speed);
    let voltage = Math.max(peakVoltage(m, c, s.ambient), peakVoltage(m, c, hot));
    const U = available(d, s);
    let use = U === null ? NaN : U > 0 ? voltage / U : Infinity;
    if (c.moves && !voltageKnown(m)) {
      if (!(use > 1)) use = NaN;
      voltage = NaN;
    }
    const drive = (limit, convention) => limit === null ? NaN : limit * AMPERES[convention][m.commutation];
    const loss = rms * rms * m.armature_resistance * copper(hot);
    return {
      voltage: use, speed: speed / m.maximum_speed,
      peak_current: peak / known(m.peak_current, drive(d.peak_current, d.current_convention)),
      continuous_current: rms / drive(d.continuous_current, d.continuous_convention),
      thermal: heat.use, peak_torque: most(c.shaft) / m.peak_torque,
      runaway: heat.lost, temperature: heat.T, peak, rms, peakVoltage: voltage, loss, peakSpeed: speed,
    };
  }

  function worst(corners) {
    const result = {};
    for (const key of Object.keys(corners[0])) {
      const values = corners.map(c => c[key]);
      result[key] = key === "runaway" ? values.some(Boolean) : Math.max(...values);
    }
    if (result.runaway) result.thermal = NaN;
    return result;
  }

  const LIMITS = ["voltage", "speed", "peak_current", "continuous_current", "thermal", "peak_torque"];

  // The motor m in the requirement d at a setting s = {supply, ambient, reserve}.
  function judge(m, d, s) {
    let found;
    if (m.corners) {
      const [kl, kh, rl, rh] = m.corners, corner = (k, r) => once({
        ...m, torque_constant: m.torque_constant * k, armature_resistance: m.armature_resistance * r,
      }, d, s);
      found = worst([corner(kl, rl), corner(kl, rh), corner(kh, rl), corner(kh, rh)]);
    } else {
      found = once(m, d, s);
    }
    const use = {};
    for (const name of LIMITS) use[name] = found[name];
    const needed = ["thermal"];
    if (s.supply !== null) needed.push("voltage");
    if (d.peak_current !== null) needed.push("peak_current");
    if (d.continuous_current !== null) needed.push("continuous_current");
    if (d.largest_inertia_ratio !== null) {
      const J = d.load_inertia / m.ratio ** 2 + m.gear_inertia;
      use.inertia_ratio = J / m.rotor_inertia / d.largest_inertia_ratio;
      needed.push("inertia_ratio");
    }
    if (d.current_limit !== null || d.power_limit !== null) {
      const hot = Number.isNaN(found.temperature) ? s.ambient : found.temperature;
      const power = found.runaway ? NaN : peakPower(m, atMotor(m, d), hot, d.bridge_drop);
      if (d.current_limit !== null) use.supply_current = s.supply === null ? NaN : power / s.supply / d.current_limit;
      if (d.power_limit !== null) use.supply_power = power / d.power_limit;
      needed.push(...["supply_current", "supply_power"].filter(name => name in use));
    }
    for (const [name, value] of Object.entries(m.fixed)) {
      use[name] = value === null ? NaN : value;
      if (d.fixed_needed.includes(name)) needed.push(name);
    }
    let largest = NaN, limiting = null;
    for (const [name, value] of Object.entries(use)) {
      if (value > largest || Number.isNaN(largest) && !Number.isNaN(value)) { largest = value; limiting = name; }
    }
    if (found.runaway) { largest = Infinity; limiting = "thermal"; }
    const lacking = !found.runaway && needed.some(name => Number.isNaN(use[name]));
    // rounding at the very edge of a limit does not reject
    const verdict = largest > (1 - s.reserve) * (1 + 1e-6) ? "no" : lacking ? "unknown" : "yes";
    return {...found, use, largest, limiting, verdict};
  }

  // What may last at a speed: by halving, of the steady winding temperature.
  function lastingTorque(m, d, s, speed) {
    const rub = zero(m.coulomb_torque) + zero(m.viscous_damping) * speed;
    const r = route(m, d, s, speed), K2 = m.torque_constant ** 2;
    const passes = T => {
      const square = (T + rub) ** 2 / K2, fixed = r.balance ? r.path * rub * speed : 0;
      const found = steady(s.ambient, r.perSquare * square, 0, fixed, r.alpha, r.beta);
      return used(r, found.T, found.lost, square, 0, d, s.ambient) <= 1;
    };
    if (!passes(0)) return NaN;
    let low = 0, high = m.torque_constant * 0.01;
    for (let i = 0; i < 60 && passes(high); i++) high *= 2;
    for (let i = 0; i < 40; i++) {
      const middle = (low + high) / 2;
      if (passes(middle)) low = middle; else high = middle;
    }
    return low;
  }

  // The torque at which a voltage is used up, with the winding at T.
  function voltageTorque(m, speed, U, T) {
    const R = m.armature_resistance * copper(T), K = m.torque_constant * flux(T, m.magnet_coefficient);
    const X = reactive(m) ? m.pole_pairs * m.armature_inductance * speed : 0;
    const a = R * R + X * X, b = R * K * speed, c = (K * speed) ** 2 - U * U;
    const current = (Math.sqrt(b * b - a * c) - b) / a;
    return K * current - zero(m.coulomb_torque) - zero(m.viscous_damping) * speed;
  }

  function peakTorque(m, d, s, speed, T) {
    const drive = d.peak_current === null ? NaN : d.peak_current * AMPERES[d.current_convention][m.commutation];
    const f = Math.min(flux(T, m.magnet_coefficient), flux(s.ambient, m.magnet_coefficient));
    const torque = m.torque_constant * f * known(m.peak_current, drive) -
      zero(m.coulomb_torque) - zero(m.viscous_damping) * speed;
    return known(torque, m.peak_torque);
  }

  return {judge, available, atMotor, lastingTorque, voltageTorque, peakTorque, voltageKnown, LIMITS};
})();
