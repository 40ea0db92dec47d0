// What the right-hand side says of a device: the sums that follow from its settings,
// and what it did on the strip.

import { el } from "../base/dom.js";
import { num } from "../base/format.js";

/**
 * @typedef {import("../engine/wire.js").Device} Device
 * @typedef {import("../engine/wire.js").Sum} Sum
 */

/** @param {import("./meaning.js").Meanings} means */
export function deviceParts(means) {
  /** Which parts are unfolded, kept while the numbers change. @type {Record<string, boolean>} */
  const open = { Arithmetic: true, "What the device did": true };

  /** @param {string} name @param {...any} children */
  function part(name, ...children) {
    const box = el("details", { class: "fold", open: open[name] }, el("summary", null, el("h3", null, name)), ...children);
    box.addEventListener("toggle", () => {
      open[name] = box.open;
    });
    return box;
  }

  return {
    /** Warnings first, in words; then each sum with its formula and the numbers in it. @param {Device} d */
    sums: (d) => [
      d.warnings.length > 0 && el("ul", { class: "doubts", "aria-label": "Warnings about the settings" },
        d.warnings.map((w) => el("li", null, el("span", { class: "sign", "aria-hidden": "true" }, "▲"), el("span", null, el("span", { class: "unseen" }, "Warning: "), w)))),
      part("Arithmetic", means.list(el("dl", { class: "sums" }, d.arithmetic.map((s) => sum(s, means)).flat()))),
    ],

    /** @param {Device} d */
    counts: (d) => part("What the device did",
      means.list(el("dl", { class: "counts" }, d.counted.flatMap((c) => [
        el("dt", null, means.name(c.label, { text: c.help, normal: "", source: c.source })),
        el("dd", null, num(c.value ?? NaN, 1), c.unit && el("span", { class: "unit" }, ` ${c.unit}`))]))),
      d.intervals.length > 0 && means.list(el("table", { class: "intervals" },
        el("thead", null, el("tr", null, ["interval", "count", "median", "from", "to, ms"].map((h) => el("th", { scope: "col" }, h)))),
        el("tbody", null, d.intervals.map((i) => el("tr", null, el("th", { scope: "row" }, means.name(i.name, means.of(`interval:${i.name}`))),
          [i.count, i.median_ms ?? NaN, i.least_ms, i.longest_ms].map((v) => el("td", null, num(v, 0))))))))),
  };
}

/** @param {Sum} s @param {import("./meaning.js").Meanings} means */
function sum(s, means) {
  const m = means.of(`sum:${s.name}`);
  return [
    el("dt", { "data-sum": s.name }, means.name(s.label, m && { ...m, text: `${m.text} ${signs(s.formula)}.`, source: s.source })),
    el("dd", { class: "amount" }, s.text.replace("-", "−"), s.unit && el("span", { class: "unit" }, ` ${s.unit}`)),
    el("dd", { class: "formula" }, `${signs(s.formula)}: ${signs(s.numbers)}`),
  ];
}

/** Minus and times as they are printed. @param {string} text */
function signs(text) {
  return text.replace(/(^| |\()-(?=[ \d])/g, "$1−").replace(/ x /g, " × ").replace(/>=/g, "≥").replace(/<=/g, "≤");
}
