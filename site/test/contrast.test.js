// The contrast of every pair of colours that css/tokens.css lets stand on each other, by
// WCAG 2.1 (1.4.3 and 1.4.11). The drawing's own colours are tested beside them, in
// engine/scene.

import assert from "node:assert/strict";
import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { test } from "node:test";
import { ROOT } from "./host.js";

const CSS = join(ROOT, "site", "css");
const tokens = readFileSync(join(CSS, "tokens.css"), "utf8");

/** The tokens of one sheet; what the dark one does not say is as on the light one. @param {boolean} dark */
function sheet(dark) {
  /** @type {Record<string, string>} */
  const out = {};
  for (const part of [/:root \{([^}]*)\}/, dark && /:root\[data-sheet="dark"\] \{([^}]*)\}/]) {
    if (part) for (const [, name, hex] of (part.exec(tokens)?.[1] ?? "").matchAll(/--([a-z-]+): (#[0-9a-f]{6})/g)) out[name] = hex;
  }
  return out;
}

/** Relative luminance. @param {string} hex */
function luminance(hex) {
  const [r, g, b] = [1, 3, 5].map((i) => parseInt(hex.slice(i, i + 2), 16) / 255).map((v) => (v <= 0.03928 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4));
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

/** @param {string} a @param {string} b */
function contrast(a, b) {
  const [x, y] = [luminance(a), luminance(b)].sort((p, q) => q - p);
  return (x + 0.05) / (y + 0.05);
}

const GROUNDS = ["paper", "paper-deep", "wash", "alarm-wash"];
const LETTERS = ["ink", "ink-soft", "atrium", "node", "his", "ventricle", "device", "alarm", "fresh"];
/** Letters in the colour of the paper on these, as in a scan and on the main button. */
const FILLED = ["ink", "ink-soft", "atrium", "node", "device", "alarm"];

test("black on white is 21:1", () => assert.equal(Math.round(contrast("#000000", "#ffffff")), 21));

for (const dark of [false, true]) {
  const colour = sheet(dark);
  test(`letters have 4.5:1 on whatever they stand on, ${dark ? "dark" : "light"} sheet`, () => {
    for (const g of GROUNDS) {
      for (const l of LETTERS) assert.ok(contrast(colour[l], colour[g]) >= 4.5, `${l} on ${g}: ${contrast(colour[l], colour[g]).toFixed(2)}`);
    }
    for (const f of FILLED) assert.ok(contrast(colour.paper, colour[f]) >= 4.5, `paper on ${f}: ${contrast(colour.paper, colour[f]).toFixed(2)}`);
  });

  test(`edges of what can be used have 3:1, ${dark ? "dark" : "light"} sheet`, () => {
    for (const g of GROUNDS) {
      for (const e of ["edge", "device"]) assert.ok(contrast(colour[e], colour[g]) >= 3, `${e} on ${g}: ${contrast(colour[e], colour[g]).toFixed(2)}`);
    }
    assert.ok(contrast(colour.ink, colour.edge) >= 3, "the mark on the bar of a normal range");
  });
}

test("nothing that can be used has an edge in the colours of the grid", () => {
  const bad = [];
  for (const file of readdirSync(CSS).filter((f) => f !== "tokens.css")) {
    for (const line of readFileSync(join(CSS, file), "utf8").split("\n")) {
      if (/(input|select|button)[^{]*\{[^}]*border(-bottom)?(-color)?: [^;]*var\(--rule/.test(line)) bad.push(`${file}: ${line.trim()}`);
    }
  }
  assert.deepEqual(bad, []);
});

test("letters grow with the size that the browser is set to", () => {
  for (const file of readdirSync(CSS)) {
    const px = [...readFileSync(join(CSS, file), "utf8").matchAll(/font(-size)?:[^;]*\b\d+px/g)].map((m) => m[0]);
    assert.deepEqual(px, [], file);
  }
});
