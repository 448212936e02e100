// The page's data out of its JSON, and how numbers and words are shown.
"use strict";
const model = (() => {
  const parse = id => JSON.parse(document.getElementById(id).textContent);
  const data = parse("data"), strings = data.strings, chunks = new Map();
  const nan = list => list === null ? new Float64Array(data.count).fill(NaN)
    : Float64Array.from(list, x => x === null ? NaN : x);
  for (const column of data.columns) {
    if (column.number) column.values = nan(column.values).map(x => x * column.scale);
  }
  const machines = {};
  for (const [name, values] of Object.entries(data.machines)) machines[name] = nan(values);

  const text = index => index === null ? "" : strings[index];
  const words = key => key.replaceAll("_", " ");

  function number(x, digits = 4) {
    if (x === null || Number.isNaN(x)) return "–";
    if (!Number.isFinite(x)) return "∞";
    if (x === 0) return "0";
    const size = Math.abs(x);
    if (size < 1e-4 || size >= 1e7) {
      const [mantissa, power] = x.toExponential(digits - 1).split("e");
      const raised = [...String(Number(power))].map(c => c === "-" ? "⁻" : "⁰¹²³⁴⁵⁶⁷⁸⁹"[c]).join("");
      return `${Number(mantissa)}·10${raised}`;
    }
    return String(Number(x.toPrecision(digits))).replace("-", "−");
  }

  const PREFIXES = [[1, ""], [1e-3, "m"], [1e-6, "µ"], [1e-9, "n"]];
  const PREFIXED = new Set(["A", "V", "Ω", "H", "N·m", "N·m/A", "V·s/rad", "N·m/√W", "N·m·s/rad", "s", "W", "m"]);
  function scale(x, unit) {
    const size = Math.abs(x);
    if (!PREFIXED.has(unit) || !size || size >= 0.1) return [1, unit];
    const [factor, prefix] = PREFIXES.find(([f]) => size >= f) || PREFIXES[3];
    return [factor, prefix + unit];
  }
  function quantity(x, unit) {
    if (x === null || Number.isNaN(x)) return "–";
    const [factor, shown] = scale(x, unit);
    return number(x / factor) + (shown && shown !== "1" ? ` ${shown}` : "");
  }

  const percent = x => x === null || Number.isNaN(x) ? "–" : Number.isFinite(x) ? `${Math.round(x * 100)} %` : "∞";

  function machine(index) {
    const m = {};
    for (const [name, values] of Object.entries(machines)) m[name] = values[index];
    const judged = data.judged;
    if (judged) {
      m.ratio = judged.ratio[index]; m.pieces = judged.pieces[index];
      m.gear_inertia = judged.gear_inertia[index];
      m.corners = judged.corners ? judged.corners[index] : null;
      m.fixed = judged.fixed[index];
    }
    return m;
  }

  function card(index) {
    const chunk = Math.floor(index / data.chunk);
    if (!chunks.has(chunk)) chunks.set(chunk, parse(`cards-${chunk}`));
    return chunks.get(chunk)[index % data.chunk];
  }

  return {data, text, words, number, quantity, scale, percent, machine, card, count: data.count};
})();

// An element with properties and children; text goes in as text only.
function make(tag, properties = {}, ...children) {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(properties)) {
    if (name in element) element[name] = value; else element.setAttribute(name, value);
  }
  element.append(...children.filter(child => child !== null));
  return element;
}
