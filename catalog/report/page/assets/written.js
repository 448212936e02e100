// Names and numbers as the program's other outputs spell them: schema/written.py in this language.
// Words, prefixes and limits come with the page, out of that module.
"use strict";
const written = (() => {
  const {spellings, smallest_plain, largest_plain, vanishing, far, prefixes, prefixed, prefix_from, prefix_below} =
    JSON.parse(document.getElementById("written").textContent);
  const units = new Set(prefixed), missing = x => x === null || x === undefined || Number.isNaN(x);

  const words = key => spellings.reduce((text, [plain, shown]) => text.replaceAll(plain, shown), key.replaceAll("_", " "));

  // Mantissa and power of ten to so many digits; the even one of two that are as near.
  function rounded(x, digits) {
    const [mantissa, power] = x.toExponential(digits - 1).split("e");
    const exact = Math.abs(x).toExponential(60), tail = exact.split("e")[0].replace(".", "").slice(digits);
    if (/^50*$/.test(tail)) {
      const head = exact.replace(".", "").slice(0, digits);
      if (Number(head.at(-1)) % 2 === 0) {
        const even = digits > 1 ? `${head[0]}.${head.slice(1)}` : head;
        return [`${x < 0 ? "-" : ""}${even}`, Number(exact.split("e")[1])];
      }
    }
    return [mantissa, Number(power)];
  }

  function number(x, digits = 4) {
    if (missing(x) || !Number.isFinite(x)) return "–";
    if (Math.abs(x) < vanishing) return "0";
    const [mantissa, size] = rounded(x, digits);
    if (smallest_plain < size && size < largest_plain) {
      const text = Number(`${mantissa}e${size}`).toFixed(Math.max(0, digits - 1 - size));
      return text.includes(".") ? text.replace(/0+$/, "").replace(/\.$/, "") : text;
    }
    const exponent = 3 * Math.floor(size / 3);
    const raised = [...String(exponent)].map(c => c === "-" ? "⁻" : "⁰¹²³⁴⁵⁶⁷⁸⁹"[c]).join("");
    return `${number(Number(`${mantissa}e${size - exponent}`), digits)}×10${raised}`;
  }

  function percent(share, decimals = 0, signed = false) {
    if (missing(share)) return "–";
    if (!Number.isFinite(share)) return share > 0 ? "∞" : "-∞";
    const value = 100 * share, size = Math.abs(value);
    let text = size.toFixed(decimals);
    const exact = size.toFixed(60), at = exact.indexOf(".") + (decimals ? decimals + 1 : 0);
    if (/^50*$/.test(exact.slice(at).replace(".", ""))) {
      const head = exact.slice(0, at);
      if (Number(head.at(-1)) % 2 === 0) text = head;
    }
    const sign = Number(text) === 0 ? "" : value < 0 ? "-" : signed ? "+" : "";
    return `${sign}${text} %`;
  }

  // What to divide a figure by, and the unit with the prefix that it then has.
  function scale(x, unit) {
    const size = Math.abs(x);
    if (missing(x) || !Number.isFinite(x) || !x || prefix_from <= size && size < prefix_below) return [1, unit];
    if (unit === "kg" && size < prefix_from) return size >= 1e-3 ? [1e-3, "g"] : [1e-6, "mg"];
    if (!units.has(unit) || (unit === "m" || unit === "s") && size >= 1) return [1, unit];
    const [factor, prefix] = prefixes.find(([f]) => size >= f) || prefixes.at(-1);
    return [factor, prefix + unit];
  }

  function quantity(x, unit, digits = 4) {
    const [factor, shown] = scale(x, unit), text = number(missing(x) ? null : x / factor, digits);
    return unit === "1" || unit === "" || text === "–" ? text : `${text} ${shown}`;
  }

  // A ratio of printed to implied: "+0.4 %", "×7.18", "÷2.28".
  function departure(ratio) {
    if (Math.abs(Math.log(ratio)) > Math.log(far)) {
      return ratio > 1 ? `×${number(ratio, 3)}` : `÷${number(1 / ratio, 3)}`;
    }
    return percent(ratio - 1, 1, true);
  }

  return {words, number, percent, scale, quantity, departure};
})();
