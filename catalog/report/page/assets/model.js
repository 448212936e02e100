// The page's data out of its JSON.
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

  return {data, text, machine, card, count: data.count};
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
