// The table, its filters and order, the settings, and what opens where.
"use strict";
const page = (() => {
  const {data} = model, {words, number, percent} = written, get = id => document.getElementById(id);
  const all = Array.from({length: model.count}, (_, i) => i), demand = data.demand, searching = data.kind === "search";
  const asked = {supply: demand.supply, ambient: demand.ambient, reserve: demand.reserve};
  let setting = {...asked}, found = [], order = null, down = false, shown = all, at = 0, open = null, printing = false;
  const VERDICTS = {yes: "✓ does it", no: "✗ does not", unknown: "? not known"};
  const haystack = data.search.map(s => s.toLowerCase());

  // ---- judging

  function judgeAll() {
    const same = setting.supply === asked.supply && setting.ambient === asked.ambient && setting.reserve === asked.reserve;
    found = all.map(i => {
      const result = judging.judge(model.machine(i), demand, setting);
      if (same) result.verdict = data.judged.verdict[i];
      return result;
    });
    const doing = found.filter(f => f.verdict === "yes").length;
    const before = data.judged.verdict.filter(v => v === "yes").length;
    const free = setting.supply === null && asked.supply !== null ? " Without a supply its voltage is no limit." : "";
    get("now").textContent = (same ? `As asked: ${before} of these ${all.length} motors do it.`
      : `Now ${doing} of these ${all.length} motors do it; as asked ${before}.`) + free;
  }

  function limiting(i) {
    const {runaway, limiting: name, largest} = found[i];
    return runaway ? "thermal runaway" : name === null ? "–" : `${words(name)} ${percent(largest)}`;
  }

  // ---- columns

  const columns = [];
  function addColumn(key, label, unit, value, display, options = {}) {
    columns.push({key, label, unit, value, display, number: true, ...options});
  }
  function setUpColumns() {
    if (searching) {
      addColumn("rank", "Rank", "", i => data.judged.rank[i] === null ? NaN : data.judged.rank[i], v => number(v));
      addColumn("verdict", "Verdict", "", i => ["yes", "unknown", "no"].indexOf(found[i].verdict), null,
        {number: false, cell: i => make("span", {className: found[i].verdict}, VERDICTS[found[i].verdict])});
    }
    addColumn("part", "Part", "", i => data.names.part[i], null, {number: false, text: true, head: true});
    addColumn("maker", "Maker", "", i => data.names.maker[i], null, {number: false, text: true, who: true});
    if (searching) {
      addColumn("ratio", "Gear ratio", "", i => data.judged.ratio[i], v => number(v));
      addColumn("largest", "Limiting", "", i => found[i].largest, null,
        {cell: limiting});
      for (const name of data.judged.limits) {
        const label = words(name);
        addColumn(`use-${name}`, label[0].toUpperCase() + label.slice(1), "of its limit", i => found[i].use[name], percent, {limit: name, detail: true});
      }
      addColumn("temperature", "Winding", "°C", i => found[i].temperature, v => number(v, 3));
      addColumn("rms", "rms current", "A", i => found[i].rms, v => number(v, 3));
      addColumn("peak", "Peak current", "A", i => found[i].peak, v => number(v, 3));
      addColumn("loss", "Copper loss", "W", i => found[i].loss, v => number(v, 3), {detail: true});
    }
    for (const column of data.columns) {
      if (column.number) addColumn(column.key, column.label, column.unit, i => column.values[i], v => number(v), {detail: column.detail});
      else addColumn(column.key, column.label, "", i => column.values[i], null, {number: false, text: true, who: true});
    }
    addColumn("findings", "Findings", "", i => data.doubts.error[i] * 1e6 + data.doubts.warning[i] * 1e3 + data.doubts.note[i], null, {
      number: false, cell: i => {
        const parts = ["error", "warning", "note"].filter(s => data.doubts[s][i]).map(s =>
          make("span", {className: s}, `${{error: "✗", warning: "!", note: "·"}[s]} ${data.doubts[s][i]} ${s}${data.doubts[s][i] > 1 ? "s" : ""} `));
        return parts.length ? make("span", {}, ...parts) : "none";
      },
    });
  }

  const look = column => [column.number ? "number" : column.who ? "who" : column.head ? "head" : "", column.detail ? "detail" : ""].join(" ").trim();

  function drawHeads() {
    get("heads").replaceChildren(...columns.map((column, c) => {
      const button = make("button", {type: "button"}, column.label, ...(column.unit ? [make("small", {}, column.unit)] : []));
      button.addEventListener("click", () => sortBy(c));
      const head = make("th", {scope: "col", className: look(column)}, button);
      head.setAttribute("aria-sort", order === c ? (down ? "descending" : "ascending") : "none");
      return head;
    }));
  }

  // ---- order and filters

  function sortBy(c) {
    if (order === c) down = !down; else { order = c; down = false; }
    [...get("heads").children].forEach((head, i) =>
      head.setAttribute("aria-sort", i === order ? (down ? "descending" : "ascending") : "none"));
    at = 0;
    arrange();
  }

  const collator = new Intl.Collator("en", {numeric: true});
  function sorted(list) {
    if (order === null) return list;
    const column = columns[order], sign = down ? -1 : 1;
    if (column.text) {
      return list.slice().sort((a, b) => sign * collator.compare(column.value(a), column.value(b)) || a - b);
    }
    const keys = new Float64Array(model.count);
    for (const i of list) keys[i] = column.value(i);
    return list.slice().sort((a, b) => {
      const x = keys[a], y = keys[b];
      if (Number.isNaN(x) || Number.isNaN(y)) return Number.isNaN(x) - Number.isNaN(y) || a - b;
      return sign * (x - y) || a - b;
    });
  }

  function filtered() {
    const wanted = get("words").value.toLowerCase().split(/\s+/).filter(Boolean);
    const doubt = get("doubt").value, verdict = get("verdict").value, {error, warning} = data.doubts;
    const limits = [...get("limit-fields").children].map(row => {
      const [low, high] = row.querySelectorAll("input");
      return {column: columns[Number(row.dataset.column)], low: low.valueAsNumber, high: high.valueAsNumber};
    }).filter(l => !Number.isNaN(l.low) || !Number.isNaN(l.high));
    return all.filter(i => {
      if (wanted.length && !wanted.every(w => haystack[i].includes(w))) return false;
      if (doubt === "error" && !error[i] || doubt === "doubt" && !error[i] && !warning[i] || doubt === "clean" && (error[i] || warning[i])) return false;
      if (verdict && found[i].verdict !== verdict) return false;
      return limits.every(({column, low, high}) => {
        const value = column.value(i) * (column.limit || column.key === "largest" ? 100 : 1);
        return !(Number.isNaN(value) || value < low || value > high);
      });
    });
  }

  function arrange() {
    shown = sorted(filtered());
    drawRows();
  }

  function drawRows() {
    const size = printing ? 1000 : Number(get("size").value), pages = Math.max(1, Math.ceil(shown.length / size));
    at = Math.min(at, pages - 1);
    const allowed = 1 - setting.reserve;
    get("rows").replaceChildren(...shown.slice(at * size, (at + 1) * size).map(i => {
      const row = make("tr", {}, ...columns.map(column => {
        if (column.head) {
          const button = make("button", {type: "button", className: "part"}, column.value(i));
          button.dataset.motor = i;
          return make("th", {scope: "row"}, button);
        }
        const value = column.value(i);
        const cell = make("td", {className: look(column)},
          column.cell ? column.cell(i) : column.display ? column.display(value) : value);
        if (column.who) cell.title = value;
        if (column.limit && found[i].limiting === column.limit) cell.classList.add("limiting");
        if (column.limit && value > allowed * (1 + 1e-5)) cell.classList.add("over");
        return cell;
      }));
      if (i === open) row.setAttribute("aria-current", "true");
      return row;
    }));
    get("count").textContent = shown.length === all.length ? `${all.length} motors` : `${shown.length} of ${all.length} motors`;
    get("page-of").textContent = `${at + 1} of ${pages}`;
    get("earlier").disabled = at === 0;
    get("later").disabled = at === pages - 1;
  }

  // ---- the card

  function choose(i, focus = true) {
    open = i;
    get("card").hidden = false;
    document.querySelector("main").classList.remove("closed");
    drawRows();
    card.show(i, get("card-body"), get("card-title"), planeSetting(i), searching ? found[i] : null);
    if (focus) get("card-title").focus();
  }
  function planeSetting(i) {
    if (searching || setting.supply !== null) return setting;
    const U = data.nominal_voltage ? data.nominal_voltage[i] : null;
    return {...setting, supply: U};
  }
  function close() {
    const i = open;
    open = null;
    get("card").hidden = true;
    document.querySelector("main").classList.add("closed");
    drawRows();
    document.querySelector(`[data-motor="${i}"]`)?.focus();
  }

  // ---- the overview

  function drawOverview() {
    const place = get("overview-chart"), size = data.columns.find(c => c.key === data.overview.size);
    if (!size) { get("overview").hidden = true; return; }
    const names = i => `${data.names.part[i]} (${data.names.maker[i]})`, unit = size.unit ? `, ${size.unit}` : "";
    if (searching) {
      get("overview-title").textContent = "Size against the limiting utilisation: filled do it, hollow do not";
      const top = 250, y = all.map(i => Math.min(Number.isFinite(found[i].largest) ? found[i].largest * 100 : top, top));
      charts.scatter(place, get("overview-hover"), {
        x: size.values, y, group: i => ["yes", "unknown", "no"].indexOf(found[i].verdict),
        groups: [{label: "does it", colour: "--strong", size: 10, filled: true}, {label: "not known", colour: "--doubt", size: 9}, {label: "does not", colour: "--line-2", size: 6}],
        names: i => `${names(i)}: ${number(size.values[i])} ${size.unit}, ${limiting(i)}, ${VERDICTS[found[i].verdict]}`,
        xLabel: size.label + unit, yLabel: "limiting utilisation, %", yRange: [0, top * 1.04], line: () => (1 - setting.reserve) * 100, choose,
      });
      return;
    }
    const other = data.columns.find(c => c.key === data.overview.against);
    if (!other) { get("overview").hidden = true; return; }
    get("overview-title").textContent = `${other.label} against ${size.label.toLowerCase()}: filled without a doubt, hollow with an error or a warning`;
    charts.scatter(place, get("overview-hover"), {
      x: size.values, y: other.values, group: i => data.doubts.error[i] || data.doubts.warning[i] ? 1 : 0,
      groups: [{label: "no doubt", colour: "--strong", size: 6, filled: true}, {label: "doubted", colour: "--bad", size: 8}],
      names: i => `${names(i)}: ${number(size.values[i])} ${size.unit}, ${number(other.values[i])} ${other.unit}`,
      xLabel: size.label + unit, yLabel: `${other.label}, ${other.unit}`, choose,
    });
  }

  // ---- settings

  const FIELDS = {supply: 1, ambient: 1, reserve: 100};
  const REFUSED = {
    supply: v => v > 0 ? "" : "A supply has more than 0 V; empty the field for no limit by voltage.",
    ambient: v => v > -273.15 ? "" : "No ambient is as cold; give more than −273.15 °C.",
    reserve: v => v >= 0 && v < 100 ? "" : "A reserve lies between 0 and 99 %.",
  };
  function setUpSettings() {
    get("asked").hidden = false;
    get("verdict-field").hidden = false;
    get("requirement").append(...data.requirement.flatMap(([term, what]) => [make("dt", {}, term), make("dd", {}, what)]));
    const ranges = {supply: asked.supply === null ? [1, 100] : [asked.supply / 3, asked.supply * 3], ambient: [-20, 90], reserve: [0, 60]};
    const fills = [];
    for (const [name, factor] of Object.entries(FIELDS)) {
      const field = get(name), slider = get(`${name}-slider`);
      [slider.min, slider.max] = ranges[name].map(v => Number(v.toPrecision(2)));
      slider.step = name === "supply" ? Number(((slider.max - slider.min) / 200).toPrecision(1)) : 1;
      const fill = () => {
        field.value = asked[name] === null ? "" : Number((asked[name] * factor).toPrecision(7));
        slider.value = field.value || slider.min;
        field.setCustomValidity("");
        field.removeAttribute("aria-invalid");
      };
      fill();
      fills.push(fill);
      const change = value => {
        const refused = value === "" ? "" : REFUSED[name](Number(value));
        field.setCustomValidity(refused);
        field.setAttribute("aria-invalid", refused !== "");
        if (refused) { get("now").textContent = refused; return; }
        const typed = value === "" ? (name === "supply" ? null : asked[name]) : Number(value) / factor;
        setting = {...setting, [name]: typed};
        rejudge();
      };
      field.addEventListener("input", () => { slider.value = field.value || slider.min; change(field.value); });
      slider.addEventListener("input", () => { field.value = slider.value; change(slider.value); });
    }
    get("settings").addEventListener("reset", event => {
      event.preventDefault();
      fills.forEach(fill => fill());
      setting = {...asked};
      rejudge();
    });
    get("settings").addEventListener("submit", event => event.preventDefault());
  }
  let pending = 0;
  function rejudge() {
    cancelAnimationFrame(pending);
    pending = requestAnimationFrame(() => {
      judgeAll();
      arrange();
      drawOverview();
      if (open !== null) choose(open, false);
    });
  }

  function setUpFilters() {
    columns.forEach((column, c) => {
      if (!column.number || column.key === "rank") return;
      const unit = column.limit || column.key === "largest" ? "%" : column.unit;
      const name = `${column.label}${unit ? `, ${unit}` : ""}`;
      const row = make("div", {}, make("span", {}, name),
        make("input", {type: "number", step: "any", placeholder: "from", ariaLabel: `${name} from`}),
        make("input", {type: "number", step: "any", placeholder: "to", ariaLabel: `${name} to`}));
      row.dataset.column = c;
      get("limit-fields").append(row);
    });
    const again = () => { at = 0; arrange(); };
    get("filters").addEventListener("input", again);
    get("filters").addEventListener("submit", event => event.preventDefault());
    get("filters").addEventListener("reset", () => setTimeout(again));
    get("size").addEventListener("change", again);
    get("earlier").addEventListener("click", () => { at--; drawRows(); });
    get("later").addEventListener("click", () => { at++; drawRows(); });
    get("close").addEventListener("click", close);
    get("rows").addEventListener("click", event => {
      const button = event.target.closest("tr")?.querySelector("[data-motor]");
      if (button && !getSelection().toString()) choose(Number(button.dataset.motor));
    });
    get("rows").addEventListener("keydown", event => {
      const step = {ArrowDown: 1, ArrowUp: -1}[event.key];
      if (!step || !event.target.dataset.motor) return;
      const buttons = [...get("rows").querySelectorAll("[data-motor]")];
      buttons[buttons.indexOf(event.target) + step]?.focus();
      event.preventDefault();
    });
    addEventListener("keydown", event => { if (event.key === "Escape" && open !== null) close(); });
    addEventListener("beforeprint", () => { printing = true; drawRows(); });
    addEventListener("afterprint", () => { printing = false; drawRows(); });
  }

  get("claim").textContent = data.claim;
  document.querySelector("main").classList.add(data.kind, "closed");
  if (searching) { setUpSettings(); judgeAll(); }
  setUpColumns();
  setUpFilters();
  drawHeads();
  arrange();
  drawOverview();
  performance.mark("drawn");

  return {choose, arrange, sortBy, columns, state: () => ({setting, shown, found, open})};
})();
