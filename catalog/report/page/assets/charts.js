// Charts by uPlot: lines that differ by dash as well as by colour, values under the pointer.
"use strict";
const charts = (() => {
  const RPM = 60 / (2 * Math.PI), live = new Map();
  const colour = name => getComputedStyle(document.documentElement).getPropertyValue(name).trim();
  const LOOKS = [
    {stroke: "--strong", width: 2.4, dash: []}, {stroke: "--ink", width: 1.8, dash: [9, 4]},
    {stroke: "--line-2", width: 1.8, dash: [2, 3]}, {stroke: "--ink", width: 1.6, dash: [9, 3, 2, 3]},
    {stroke: "--line-3", width: 1.8, dash: [4, 3]}, {stroke: "--line-2", width: 2.4, dash: []},
    {stroke: "--strong", width: 1.6, dash: [12, 3, 2, 3, 2, 3]}, {stroke: "--line-3", width: 1.2, dash: []},
  ];
  // On a logarithmic axis 1, 2 and 5 of each decade are labelled.
  const mantissa = v => Math.round(v / 10 ** Math.floor(Math.log10(v) + 1e-9));
  const LOG = {
    filter: (u, splits, axisIndex) => {
      const {min, max} = u.scales[u.axes[axisIndex].scale], wide = max / min > 200;
      return splits.map(v => (wide ? [1] : [1, 2, 5]).includes(mantissa(v)) ? v : null);
    },
  };
  const axis = (label, log) => ({
    label, ...(log ? LOG : {}), stroke: colour("--ink"), grid: {stroke: colour("--grid"), width: 1},
    values: (u, splits) => splits.map(v => v === null ? "" : written.number(v, 7)),
    ticks: {stroke: colour("--grid"), width: 1}, font: "12px system-ui, sans-serif",
    labelFont: "12px system-ui, sans-serif", labelSize: 22,
  });

  // Draws into a place and again when the theme or the width changes.
  function draw(place, options, data) {
    const old = live.get(place);
    if (old) old.chart.destroy();
    place.replaceChildren();
    const width = Math.max(280, place.clientWidth);
    live.set(place, {chart: new uPlot({...options(), width}, data, place), options, data});
  }
  function redraw() {
    for (const [place, {options, data}] of [...live]) {
      if (place.isConnected) draw(place, options, data); else live.delete(place);
    }
  }
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", redraw);
  let waiting = 0;
  addEventListener("resize", () => { clearTimeout(waiting); waiting = setTimeout(redraw, 120); });

  function swatch(look) {
    const canvas = make("canvas", {width: 34, height: 8}), pen = canvas.getContext("2d");
    pen.strokeStyle = colour(look.stroke); pen.lineWidth = look.width; pen.setLineDash(look.dash);
    pen.moveTo(0, 4); pen.lineTo(34, 4); pen.stroke();
    return canvas;
  }

  // Lines over one x; the legend doubles as the read-out of the values under the pointer.
  function lines(place, {x, series, xLabel, yLabel, xRange, yRange, log, hooks, show, extra = []}) {
    const legend = make("ul", {className: "legend"}), hover = make("p", {className: "hover"});
    hover.setAttribute("aria-hidden", "true");
    const chart = make("div", {className: "chart"});
    place.replaceChildren(chart, legend, hover);
    chart.setAttribute("role", "img");
    chart.setAttribute("aria-label", `${yLabel} over ${xLabel}: ${[...series.map(s => s.label), ...extra].join(", ")}`);
    series.forEach((s, i) => legend.append(make("li", {}, swatch(s.look || LOOKS[i % LOOKS.length]), s.label)));
    extra.forEach(text => legend.append(make("li", {}, text)));
    const options = () => ({
      height: 270, legend: {show: false}, cursor: {drag: {x: false, y: false}},
      scales: {x: {time: false, range: xRange, distr: log ? 3 : 1}, y: {range: yRange}},
      axes: [{...axis(xLabel, log), size: 30}, {...axis(yLabel), size: 58}],
      series: [{}, ...series.map((s, i) => {
        const look = s.look || LOOKS[i % LOOKS.length];
        return {
          label: s.label, stroke: colour(look.stroke), width: look.width, dash: look.dash,
          spanGaps: false, points: {show: false},
        };
      })],
      hooks: {
        ...hooks,
        setCursor: [u => {
          const i = u.cursor.idx;
          hover.textContent = i === null || i === undefined ? "" :
            `${xLabel} ${show.x(x[i])}: ` + series.filter(s => s.y[i] !== null && s.y[i] !== undefined)
              .map(s => `${s.label} ${show.y(s.y[i])}`).join("; ");
        }],
      },
    });
    draw(chart, options, [x, ...series.map(s => s.y)]);
  }

  const gap = v => Number.isFinite(v) ? v : null;

  // Torque over speed with what limits it, the nominal point as published, and the cycle if there
  // is one.
  function plane(place, m, d, s, found, rated) {
    const U = judging.available(d, s);
    const work = m.pieces !== undefined && m.pieces !== null ? judging.atMotor(m, d) : null;
    const hot = found && Number.isFinite(found.temperature) ? found.temperature : m.maximum_winding_temperature;
    const T = Number.isFinite(hot) ? hot : s.ambient;
    let top = work ? Math.max(...work.speed.flat().map(Math.abs)) : 0;
    if (U !== null) top = Math.max(top, U / m.torque_constant);
    else if (Number.isFinite(m.maximum_speed)) top = Math.max(top, m.maximum_speed);
    if (!(top > 0)) { place.replaceChildren(make("p", {className: "note"}, "No supply or speed to draw the plane for.")); return; }
    const rows = [];
    for (let i = 0; i <= 100; i++) rows.push(1.05 * top * i / 100);
    const cycle = work ? work.shaft.map((ends, p) => ends.map((t, i) =>
      [Math.abs(work.speed[p][i]), work.basis[p][0][2] < 0 ? -t : t])) : [];
    const factor = Math.max(...[...cycle.flat().map(c => c[1]), judging.lastingTorque(m, d, s, 0) || 0]) < 1 ? 1e3 : 1;
    const unit = factor === 1 ? "N·m" : "mN·m";
    const curve = f => rows.map(w => gap(f(w) * factor));
    const fastest = m.maximum_speed, ends = fastest < rows[rows.length - 1];
    if (ends && !rows.includes(fastest)) { rows.push(fastest); rows.sort((a, b) => a - b); }
    const series = [{label: "continuous", look: LOOKS[0], y: curve(w => ends && w > fastest ? NaN : judging.lastingTorque(m, d, s, w))}];
    const peak = curve(w => judging.peakTorque(m, d, s, w, T));
    if (peak.some(v => v !== null)) series.push({label: "peak", look: LOOKS[1], y: peak});
    if (U !== null) {
      series.push({label: `${written.number(U)} V, winding ${written.number(s.ambient, 3)} °C`, look: LOOKS[2], y: curve(w => judging.voltageTorque(m, w, U, s.ambient))});
      if (Number.isFinite(hot)) series.push({label: `${written.number(U)} V, winding ${written.number(hot, 3)} °C`, look: LOOKS[3], y: curve(w => judging.voltageTorque(m, w, U, hot))});
    }
    const shown = series.filter(one => one.y.some(v => v !== null));
    if (!shown.length) { place.replaceChildren(make("p", {className: "note"}, "Its sheet tells no limit to draw.")); return; }
    const point = rated && rated[0] <= 1.05 * top ? rated : null;
    const asked = [...cycle.flat().map(c => c[1] * factor), ...(point ? [point[1] * factor] : [])], lasting = Math.max(0, ...shown[0].y.filter(v => v !== null));
    const most = Math.max(peak.some(v => v !== null) ? Math.max(...peak.filter(v => v !== null)) : 3 * lasting, ...asked);
    const least = Math.min(0, ...asked);
    lines(place, {
      x: rows.map(w => w * RPM), series: shown, 
      hooks: {draw: [u => {
        if (ends) drawEdge(u, fastest * RPM);
        drawCycle(u, cycle, work ? work.stretch : [], factor);
        if (point) drawPoint(u, point[0] * RPM, point[1] * factor);
      }]},
      extra: [...(cycle.length ? ["●─● the cycle"] : []), ...(ends ? [`│ permissible speed, ${written.number(fastest * RPM)} rpm`] : []), ...(point ? ["□ nominal point, as published"] : [])],
      xLabel: "speed, rpm", yLabel: `torque, ${unit}`,
      xRange: [0, 1.05 * top * RPM], yRange: [least * 1.2, (most || 1) * 1.2],
      show: {x: v => written.number(v), y: v => `${written.number(v, 3)} ${unit}`},
    });
    if (!judging.voltageKnown(m)) place.append(make("p", {className: "note"}, "Inductance or pole pairs are unknown: the voltage limits are upper bounds."));
  }

  // The permissible speed: an upright line.
  function drawEdge(u, rpm) {
    const pen = u.ctx, x = u.valToPos(rpm, "x", true);
    pen.save();
    pen.setLineDash([]);
    pen.strokeStyle = colour("--ink");
    pen.lineWidth = devicePixelRatio;
    pen.beginPath(); pen.moveTo(x, u.bbox.top); pen.lineTo(x, u.bbox.top + u.bbox.height); pen.stroke();
    pen.restore();
  }

  function drawPoint(u, rpm, torque) {
    const pen = u.ctx, half = 4 * devicePixelRatio;
    const x = u.valToPos(rpm, "x", true), y = u.valToPos(torque, "y", true);
    pen.save();
    pen.setLineDash([]);
    pen.fillStyle = colour("--sheet");
    pen.strokeStyle = colour("--strong");
    pen.lineWidth = 1.5 * devicePixelRatio;
    pen.fillRect(x - half, y - half, 2 * half, 2 * half);
    pen.strokeRect(x - half, y - half, 2 * half, 2 * half);
    pen.restore();
  }

  // Lines between the ends of all pieces, dots at those of the stretches.
  function drawCycle(u, cycle, stretch, factor) {
    const pen = u.ctx;
    pen.save();
    pen.setLineDash([]);
    pen.strokeStyle = pen.fillStyle = colour("--line-3");
    pen.lineWidth = 1.5 * devicePixelRatio;
    cycle.forEach((ends, p) => {
      const [a, b] = ends.map(([w, t]) => [u.valToPos(w * RPM, "x", true), u.valToPos(t * factor, "y", true)]);
      pen.beginPath(); pen.moveTo(...a); pen.lineTo(...b); pen.stroke();
      const outer = [stretch[p - 1] === stretch[p] ? null : a, stretch[p + 1] === stretch[p] ? null : b];
      for (const end of outer) if (end) { pen.beginPath(); pen.arc(...end, 3 * devicePixelRatio, 0, 7); pen.fill(); }
    });
    pen.restore();
  }

  // Every limit's utilisation over the gear ratio.
  function ratios(place, m, d, s, span) {
    const x = [], found = [];
    for (let i = 0; i <= 120; i++) {
      x.push(span[0] * (span[1] / span[0]) ** (i / 120));
      found.push(judging.judge({...m, ratio: x[i]}, d, s));
    }
    const names = Object.keys(found[0].use).filter(name => found.some(f => !f.runaway && Number.isFinite(f.use[name])));
    const lost = x.filter((_, i) => found[i].runaway);
    if (!names.length) { place.replaceChildren(make("p", {className: "note"}, "At every ratio the winding runs away thermally: there is no working point to draw.")); return; }
    const series = names.map(name => ({label: written.words(name), y: found.map(f => f.runaway ? null : gap(f.use[name] * 100))}));
    const allowed = (1 - s.reserve) * 100;
    const inside = found.map(f => f.verdict === "yes");
    const hooks = {drawClear: [u => {
      const pen = u.ctx, y = u.valToPos(allowed, "y", true);
      pen.save();
      pen.fillStyle = colour("--shade");
      inside.forEach((good, i) => {
        if (!good || i === 0) return;
        const a = u.valToPos(x[i - 1], "x", true), b = u.valToPos(x[i], "x", true);
        pen.fillRect(a, u.bbox.top, b - a + 1, u.bbox.height);
      });
      pen.setLineDash([]); pen.strokeStyle = colour("--ink"); pen.lineWidth = 1;
      pen.beginPath(); pen.moveTo(u.bbox.left, y); pen.lineTo(u.bbox.left + u.bbox.width, y); pen.stroke();
      pen.restore();
    }]};
    const tallest = Math.max(...series.flatMap(one => one.y).filter(v => v !== null));
    lines(place, {
      x, series, hooks, log: span[1] > 3 * span[0], xLabel: "gear ratio", yLabel: "utilisation, %",
      xRange: [span[0], span[1]], yRange: [0, Math.min(Math.max(115, 1.1 * tallest), 200)],
      show: {x: v => written.number(v, 3), y: v => `${Math.round(v)} %`},
    });
    place.append(make("p", {className: "note"}, `Shaded: ratios that do it. Line: ${Math.round(allowed)} % allowed. Chosen: ${written.number(m.ratio)}.`));
    if (lost.length) place.append(make("p", {className: "note"}, `No lines from ratio ${written.number(lost[0], 3)} to ${written.number(lost[lost.length - 1], 3)}: there the winding runs away thermally, so that no working point exists.`));
  }

  // One mark a motor; the nearest one to the pointer is named, a click opens its card.
  function scatter(place, hover, {x, y, groups, group, names, xLabel, yLabel, line, choose, yRange}) {
    const order = [...x.keys()].filter(i => Number.isFinite(x[i]) && x[i] > 0 && Number.isFinite(y[i]) && y[i] > 0)
      .sort((a, b) => x[a] - x[b]);
    const columns = [order.map(i => x[i]), ...groups.map((_, g) => order.map(i => group(i) === g ? y[i] : null))];
    if (!order.length) { place.replaceChildren(make("p", {className: "note"}, "No motor has both figures.")); return; }
    let nearest = null;
    place.setAttribute("role", "img");
    place.setAttribute("aria-label", `${yLabel} over ${xLabel}; the table has the same figures`);
    const options = () => ({
      height: 300, legend: {show: false}, cursor: {drag: {x: false, y: false}, points: {show: false}},
      scales: {x: {time: false, distr: 3}, y: yRange ? {range: yRange} : {distr: 3}},
      axes: [{...axis(xLabel, true), size: 30}, {...axis(yLabel, !yRange), size: 62}],
      series: [{}, ...groups.map(g => ({
        label: g.label, stroke: colour(g.colour), width: 0, paths: () => null,
        points: {show: true, size: g.size, width: 1.6, stroke: colour(g.colour), fill: g.filled ? colour(g.colour) : colour("--sheet")},
      }))],
      hooks: {
        drawClear: line === undefined ? [] : [u => {
          const at = u.valToPos(line(), "y", true);
          u.ctx.save(); u.ctx.setLineDash([]); u.ctx.strokeStyle = colour("--ink");
          u.ctx.beginPath(); u.ctx.moveTo(u.bbox.left, at); u.ctx.lineTo(u.bbox.left + u.bbox.width, at); u.ctx.stroke();
          u.ctx.restore();
        }],
        setCursor: [u => {
          nearest = null;
          let best = 900;
          if (u.cursor.left >= 0) order.forEach(i => {
            const dx = u.valToPos(x[i], "x") - u.cursor.left, dy = u.valToPos(y[i], "y") - u.cursor.top;
            if (dx * dx + dy * dy < best) { best = dx * dx + dy * dy; nearest = i; }
          });
          hover.textContent = nearest === null ? "" : names(nearest);
        }],
        ready: [u => u.over.addEventListener("click", () => { if (nearest !== null) choose(nearest); })],
      },
    });
    draw(place, options, columns);
  }

  return {plane, ratios, scatter};
})();
