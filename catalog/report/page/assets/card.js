// A motor's card: constants, figures as published, findings, provenance, charts.
"use strict";
const card = (() => {
  const {data, text} = model, {words, number, quantity, scale, departure} = written;
  const SIGNS = {error: "✗", warning: "!", note: "·"};

  function table(caption, heads, rows) {
    return make("div", {className: "scroll", tabIndex: 0, role: "region", ariaLabel: caption}, make("table", {}, make("caption", {className: "note"}, caption),
      make("thead", {}, make("tr", {}, ...heads.map(h => make("th", {scope: "col"}, h)))),
      make("tbody", {}, ...rows.map(cells => make("tr", {}, ...cells.map((cell, i) =>
        make(i === 0 ? "th" : "td", i === 0 ? {scope: "row"} : {}, cell)))))));
  }

  function interval(low, high, unit, value) {
    if (low === null && high === null) return "";
    const [factor] = scale(value, unit);
    if (low === high) return "exact";
    if (low === null) return `≤ ${number(high / factor)}`;
    if (high === null) return `≥ ${number(low / factor)}`;
    return `${number(low / factor)} … ${number(high / factor)}`;
  }

  function figures(list, doubts, caption) {
    return table(caption, ["Figure", "Printed", "In SI", "Convention", "Cell"], list.map(f => {
      const [key, printed, unit, value, convention, row, column, corrected] = f;
      const severity = doubts.get(text(key));
      const name = make("span", {}, words(text(key)));
      if (severity) name.prepend(make("span", {className: severity, title: severity}, `${SIGNS[severity]} `));
      let note = text(convention);
      if (corrected) note = `corrected to ${corrected[0]}: ${corrected[1]}`;
      return [name, printed, value === null ? "" : quantity(value, text(unit)), note, [row && `R${row}`, column && `C${column}`].filter(Boolean).join(" ")];
    }));
  }

  // Printed over implied: fine near 1, logarithmic far off.
  function implied(rows) {
    const place = log => Math.asinh(log / 0.02);
    const reach = Math.max(0.06, ...rows.map(r => 1.2 * Math.max(Math.abs(Math.log(r[1])), 2 * r[4])));
    const x = log => 100 + 96 * place(Math.max(Math.min(log, reach), -reach)) / place(reach);
    const grid = make("div", {className: "implied", role: "list"});
    const svgNode = (tag, attributes) => {
      const node = document.createElementNS("http://www.w3.org/2000/svg", tag);
      for (const [name, value] of Object.entries(attributes)) node.setAttribute(name, value);
      return node;
    };
    for (const [key, ratio, below, above, sd, severity] of rows) {
      const low = ratio * below, high = ratio * above;
      const svg = svgNode("svg", {viewBox: "0 0 200 18", preserveAspectRatio: "none", "aria-hidden": "true"});
      const left = x(-2 * sd), right = x(2 * sd), at = x(Math.log(ratio));
      svg.append(svgNode("rect", {class: "band", x: left, y: 2, width: right - left, height: 14}),
        svgNode("line", {class: "axis", x1: 100, x2: 100, y1: 0, y2: 18}),
        svgNode("line", {class: "ends", x1: x(Math.log(low)), x2: x(Math.log(high)), y1: 9, y2: 9}));
      if (severity === null) svg.append(svgNode("rect", {class: "mark", x: at - 1.2, y: 4, width: 2.4, height: 10}));
      else svg.append(svgNode("path", {class: "wrong", d: `M${at - 3} 3L${at + 3} 15M${at - 3} 15L${at + 3} 3`}));
      const name = words(text(key)), word = severity === null ? "" : ` (${text(severity)})`;
      const off = departure(ratio);
      const title = svgNode("title", {});
      title.textContent = `${name}: printed is ${off} against what the others imply`;
      svg.append(title);
      grid.append(make("span", {role: "listitem", className: severity === null ? "" : "error"}, name + word), svg, make("span", {}, off));
    }
    return grid;
  }

  function show(index, body, title, setting, found) {
    const c = model.card(index), m = model.machine(index), parts = [];
    title.textContent = c.name;
    const kind = [c.maker, c.series ? `series ${c.series}` : "", c.kind, c.description].filter(Boolean).join(", ");
    parts.push(make("p", {}, kind));
    if (found) {
      const word = {yes: "✓ does it", no: "✗ does not", unknown: "? not known"}[found.verdict];
      const uses = Object.entries(found.use).filter(([, v]) => !Number.isNaN(v)).map(([k, v]) => `${words(k)} ${written.percent(v)}`);
      parts.push(make("p", {}, make("span", {className: found.verdict}, word),
        ` at gear ratio ${number(m.ratio)}${c.gear ? ` (${c.gear})` : ""}: ${uses.join(", ")}.`));
      if (c.needs) parts.push(make("p", {className: "note"}, `As asked: ${c.needs}`));
    }
    parts.push(make("h3", {}, "Findings"));
    const doubts = new Map();
    for (const f of c.findings) for (const key of f[2]) if (!doubts.has(text(key))) doubts.set(text(key), text(f[0]));
    parts.push(c.findings.length
      ? make("ul", {}, ...c.findings.map(f => make("li", {}, make("span", {className: text(f[0])}, `${SIGNS[text(f[0])]} ${text(f[0])}: `), text(f[1]))))
      : make("p", {}, "None: the printed figures agree with one another."));
    const planePlace = make("div"), ratioPlace = make("div");
    parts.push(make("h3", {}, "Torque over speed"), planePlace);
    if (found && data.demand.ratio_range) parts.push(make("h3", {}, "Utilisation over the gear ratio"), ratioPlace);
    parts.push(make("h3", {}, "Constants at 25 °C"), table("With 95 % intervals", ["Constant", "Value", "Interval", "Basis"],
      c.constants.map(([key, unit, value, low, high, basis]) =>
        [words(text(key)), quantity(value, text(unit)), interval(low, high, text(unit), value), text(basis)])));
    if (c.implied.length) {
      parts.push(make("h3", {}, "Printed over implied"), implied(c.implied), make("p", {className: "note"},
        "Bar: where 95 % of sound figures lie; mark: as printed, with the interval of its digits; cross: what a finding doubts."));
    }
    parts.push(make("h3", {}, "As published"), figures(c.figures, doubts, c.source));
    for (const [when, list] of c.conditions) parts.push(figures(list, new Map(), when));
    body.replaceChildren(...parts);
    const published = name => (c.figures.find(f => text(f[0]) === name) || [])[3];
    const rated = [published("nominal speed"), published("nominal torque")];
    charts.plane(planePlace, m, data.demand, setting, found, rated.every(v => v > 0) ? rated : null);
    if (ratioPlace.isConnected) charts.ratios(ratioPlace, m, data.demand, setting, data.demand.ratio_range);
  }

  return {show};
})();
