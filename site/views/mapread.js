// What a map says in words: the point under the cursor, where behaviour changes, every
// row as text, and all of it to copy or save.

import { el, fill, say } from "../base/dom.js";
import { count, num } from "../base/format.js";
import { saying } from "../model/behaviour.js";
import { writeCSV } from "../model/grid.js";
import { inksOfSheet } from "./inks.js";
import { download } from "./file.js";
import { outcomeText, valueText, whereText, withUnit } from "./mapwords.js";

/**
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {import("../engine/sweeper.js").Run} Run
 * @typedef {import("../engine/sweeper.js").Boundary} Boundary
 * @typedef {import("../engine/sweeper.js").Form} Form
 * @typedef {import("./mapchart.js").Sorts} Sorts
 */

/** Outcomes of one point, or of two side by side. */
export function pointTable() {
  const node = el("div", { class: "map-point" });
  return {
    node,
    /** @param {Grid} grid @param {number} p @param {number} kept -1 for none */
    show(grid, p, kept) {
      const both = kept >= 0 && kept !== p;
      const cells = (/** @type {import("../model/grid.js").About} */ o) => [both ? kept : -1, p].filter((q) => q >= 0).map((q) => el("td", null, outcomeText(grid, q, o) || "–"));
      const why = grid.refused(p);
      fill(node,
        el("h3", null, whereText(grid, p)),
        both && el("p", { class: "aside" }, `Beside the kept point: ${whereText(grid, kept)}.`),
        why !== undefined ? el("p", { class: "map-why" }, `No such plan can be. ${why}`)
          : !grid.has(p) ? el("p", { class: "aside" }, "Not computed yet.")
            : el("table", { class: "map-outcomes" },
              el("caption", { class: "unseen" }, `Outcomes at ${whereText(grid, p)}`),
              both && el("thead", null, el("tr", null, el("th", { scope: "col" }, "outcome"), el("th", { scope: "col" }, "kept"), el("th", { scope: "col" }, "here"))),
              el("tbody", null, grid.outcomes().map((o) => el("tr", null, el("th", { scope: "row" }, o.label), cells(o))))));
    },
  };
}

/**
 * Boundaries along the row and the column of the cursor.
 * @param {Grid} grid
 * @param {string} outcome
 * @param {{along: number, at: number, boundaries: Boundary[], alone: Form[]}[]} parts
 */
export function boundaryTables(grid, outcome, parts) {
  return parts.map(({ along, at, boundaries, alone }) => {
    const axis = along === 0 ? grid.head.x : /** @type {import("../model/grid.js").AxisHead} */ (grid.head.y);
    const other = along === 0 ? grid.head.y : grid.head.x;
    const unit = withUnit(axis.unit);
    const digits = axis.unit === "/min" ? 2 : 1;
    const title = `Along ${axis.label}${other ? `, at ${other.label} ${valueText(other.values[at])}${typeof other.values[at] === "number" ? withUnit(other.unit) : ""}` : ""}`;
    const word = (/** @type {string} */ w) => (w === "refused" ? "no such plan" : saying(outcome, w));
    return el("div", { class: "map-bounds" },
      el("h4", null, title),
      boundaries.length === 0 ? el("p", { class: "aside" }, "It does not change here.") : el("table", null,
        el("thead", null, el("tr", null, ["from", "to", `between, ${axis.unit || "value"}`, "closed form", "apart"].map((h) => el("th", { scope: "col" }, h)))),
        el("tbody", null, boundaries.map((b) => el("tr", { "data-form": b.closed_form?.name ?? null },
          el("td", null, word(b.before)), el("td", null, word(b.after)),
          el("td", null, `${num(b.low, digits)} and ${num(b.high, digits)}`),
          el("td", { title: b.closed_form ? `${b.closed_form.label}: ${b.closed_form.formula}. ${b.closed_form.source}` : "" }, b.closed_form ? `${num(b.closed_form.value, digits)}${unit}` : "none"),
          el("td", null, b.closed_form ? num(b.closed_form.off, digits) : "–"))))),
      boundaries.some((b) => b.closed_form) && el("ul", { class: "aside" }, boundaries.flatMap((b) => (b.closed_form ? [el("li", null, `${b.closed_form.label}: ${b.closed_form.formula}, ${b.closed_form.numbers}`)] : []))),
      alone.length > 0 && el("p", { class: "aside" }, `No change was found at: ${alone.map((f) => `${f.label} (${num(f.value, digits)}${unit})`).join("; ")}.`));
  });
}

/**
 * The map as text: for every row what comes from where to where.
 * @param {Grid} grid
 * @param {Sorts} s
 */
export function rowsTable(grid, s) {
  const { x, y } = grid.head;
  const rows = Array.from({ length: grid.ny }, (_, i) => grid.ny - 1 - i).map((j) => {
    const parts = [];
    for (let i = 0; i < grid.nx;) {
      const k = grid.has(j * grid.nx + i) ? s.at(j * grid.nx + i) : -1;
      let to = i + 1;
      while (to < grid.nx && (grid.has(j * grid.nx + to) ? s.at(j * grid.nx + to) : -1) === k) to++;
      const span = to - i === 1 ? `at ${valueText(x.values[i])}` : `${valueText(x.values[i])} to ${valueText(x.values[to - 1])}`;
      parts.push(`${k < 0 ? "not computed" : s.sorts[k].text} ${span}`);
      i = to;
    }
    return el("tr", null, y && el("th", { scope: "row" }, valueText(y.values[j])), el("td", null, parts.join("; ")));
  });
  return el("table", { class: "map-rows" },
    el("caption", { class: "unseen" }, `${s.about?.label ?? ""} by rows`),
    el("thead", null, el("tr", null, y && el("th", { scope: "col" }, y.unit ? `${y.label}, ${y.unit}` : y.label), el("th", { scope: "col" }, `${s.about?.label ?? ""} by ${x.label}${x.unit ? `, ${x.unit}` : ""}`))),
    el("tbody", null, rows));
}

/**
 * Buttons that copy and save the numbers.
 * @param {() => Grid | null} grid
 */
export function tableTools(grid) {
  const said = el("span", { class: "aside", role: "status" });
  const copy = async () => {
    const g = grid();
    if (!g) return;
    try {
      await navigator.clipboard.writeText(writeCSV(g));
      say(said, `${count(g.done(), "point")} copied as CSV.`);
    } catch {
      say(said, "This browser does not let the page copy; save the file instead.");
    }
  };
  const save = () => {
    const g = grid();
    if (!g) return;
    const name = `${(g.head.title || "map").toLowerCase().replace(/[^a-z0-9]+/g, "-").replace(/^-+|-+$/g, "").slice(0, 60) || "map"}.csv`;
    download(new Blob([writeCSV(g)], { type: "text/csv" }), name);
    say(said, `Saved as ${name}.`);
  };
  return el("div", { class: "map-tools" },
    el("button", { type: "button", id: "map-copy", onclick: copy }, "Copy as CSV"),
    el("button", { type: "button", id: "map-save", onclick: save }, "Save as CSV"), said);
}

/** The legend: colour and pattern, word, number of points. */
export function mapLegend() {
  const node = el("div", { class: "map-key" });
  let made = "";
  /** @type {HTMLElement[]} */
  let counts = [];

  /** @param {Sorts} s */
  function list(s) {
    const inks = inksOfSheet();
    return el("ul", { class: "map-legend", "aria-label": `Legend: ${s.about?.label ?? ""}` }, s.sorts.flatMap((sort) => {
      const number = el("span", { class: "aside" });
      counts.push(number);
      if (sort.count === 0) return [];
      const canvas = el("canvas", { class: "map-swatch", width: 44, height: 28, "aria-hidden": "true" });
      const g = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
      g.scale(2, 2);
      g.fillStyle = inks.fill(sort.look);
      g.fillRect(0, 0, 22, 14);
      return [el("li", null, canvas, sort.text, number)];
    }));
  }

  return {
    node,
    /** @param {Sorts[]} all one for each band; their headings where there are several */
    show(all) {
      const key = JSON.stringify([inksOfSheet().key, all.map((s) => [s.about?.name, s.sorts.filter((x) => x.count > 0).map((x) => x.text)])]);
      if (key !== made) {
        made = key;
        counts = [];
        fill(node, all.map((s) => [all.length > 1 && el("p", { class: "map-legend-of" }, s.about?.label ?? ""), list(s)]).flat());
      }
      all.flatMap((s) => s.sorts).forEach((sort, i) => say(counts[i], String(sort.count)));
    },
  };
}
