// Every view and state, in both sheets, before the rules of axe-core: none may have
// an issue that it calls serious or critical.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { test } from "node:test";
import { settled } from "./host.js";
import { AH, onPage, openPreset, person, RATE, stage, walkTo } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

const AXE = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");

stage();

/**
 * What axe calls serious or critical, one line for each place.
 * @param {Page} page
 * @returns {Promise<string[]>}
 */
async function issues(page) {
  if (!(await page.evaluate(() => "axe" in window))) await page.evaluate(AXE);
  return page.evaluate(async () => {
    const { violations } = await /** @type {any} */ (window).axe.run(document, { resultTypes: ["violations"] });
    return violations.filter((/** @type {any} */ v) => ["serious", "critical"].includes(v.impact))
      .flatMap((/** @type {any} */ v) => v.nodes.slice(0, 6).map((/** @type {any} */ n) => `${v.id}: ${n.target.join(" ")}: ${n.failureSummary.split("\n")[1]?.trim() ?? ""}`));
  });
}

/** Puts the sheet into its other colours, from wherever the page is. @param {Page} page */
const turn = (page) => page.evaluate(() => new Promise((done) => {
  const root = document.documentElement;
  root.dataset.sheet = root.dataset.sheet === "dark" ? "light" : "dark";
  requestAnimationFrame(() => done(null));
}));

/** @param {Page} page @param {string} state */
async function check(page, state) {
  /** @type {string[]} */
  const found = [];
  for (let sheet = 0; sheet < 2; sheet++) {
    const dark = await page.evaluate(() => document.documentElement.dataset.sheet);
    for (const line of await issues(page)) found.push(`${state}, ${dark}: ${line}`);
    await turn(page);
  }
  assert.deepEqual(found, []);
}

const DEVICE = "dual-upper-rate-wenckebach";

/** @type {{name: string, size?: {width: number, height: number}, reach: (page: Page) => Promise<unknown>}[]} */
const STATES = [
  { name: "timeline without a device", reach: async () => {} },
  { name: "timeline with a device", reach: (page) => openPreset(page, DEVICE) },
  { name: "a selected event", reach: async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await walkTo(page, "block");
  } },
  { name: "an extra beat and its scan", reach: async (page) => {
    await page.focus("#timeline");
    await page.keyboard.press("b");
    await page.waitForSelector("#scan:visible");
    await page.click("#scan");
    await page.waitForSelector(".segment");
    await page.waitForFunction(() => document.querySelector("#scan")?.textContent === "Scan the coupling");
  } },
  { name: "before and after, differences", reach: async (page) => {
    await openPreset(page, DEVICE);
    await page.click("#keep-before");
    await page.fill(RATE, "110");
    await settled(page);
    await page.waitForSelector("table.contrast");
  } },
  { name: "before and after, measured", reach: async (page) => {
    await page.click("#keep-before");
    await page.fill(RATE, "110");
    await settled(page);
    await page.click('[data-panel="measured"]');
  } },
  { name: "calipers with heights, march and a pin", reach: async (page) => {
    await page.click("#calipers");
    for (const name of ["March", "mV", "Pin"]) await page.click(`.caliper-read button:text-is("${name}")`);
  } },
  { name: "a gap explained", reach: async (page) => {
    await openPreset(page, DEVICE);
    await page.focus("#timeline");
    await page.keyboard.press("g");
    await settled(page);
  } },
  { name: "listing", reach: async (page) => {
    await page.click("#tab-listing");
    await page.waitForSelector(".lines li");
  } },
  { name: "map, not yet run", reach: (page) => page.click("#tab-map") },
  { name: "settings unfolded, with a table of settings", reach: async (page) => {
    await openPreset(page, DEVICE);
    await page.evaluate(() => document.querySelectorAll("#settings details").forEach((d) => { /** @type {HTMLDetailsElement} */ (d).open = true; }));
    await page.evaluate(() => /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("#settings .more:not([hidden])")).forEach((b) => b.click()));
    await page.evaluate(() => /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("#settings .add")).forEach((b) => b.click()));
    await settled(page);
  } },
  { name: "changed only, and a search without a hit", reach: async (page) => {
    await page.fill(RATE, "110");
    await page.check(".settings .only input");
    await page.fill('#settings input[type="search"]', "nothing like it");
  } },
  { name: "presets", reach: (page) => page.click("#presets") },
  { name: "keys", reach: (page) => page.click("#keys") },
  { name: "File menu", reach: (page) => page.click(".menu summary") },
  { name: "Leads and Lanes unfolded", reach: async (page) => {
    await page.evaluate(() => document.querySelectorAll(".toolbar details").forEach((d) => { /** @type {HTMLDetailsElement} */ (d).open = true; }));
  } },
  { name: "kept plans", reach: async (page) => {
    await page.focus("#timeline");
    await page.keyboard.press("Control+s");
    await page.keyboard.press("Escape");
    await page.focus("#timeline");
    await page.keyboard.press("Shift+K");
    await page.waitForSelector("dialog.kept[open]");
  } },
  { name: "print and export", reach: async (page) => {
    await page.click("#print");
    await page.waitForSelector(".print-picture:visible", { timeout: 60000 });
  } },
  { name: "presentation", reach: async (page) => {
    await page.focus("#timeline");
    await page.keyboard.press("t");
    await page.waitForSelector("#present-next:visible");
  } },
  { name: "wrong values", reach: async (page) => {
    await page.fill(RATE, "9000");
    await page.fill(AH, "abc");
    await page.waitForSelector("#show-wrong");
  } },
  { name: "drawer of settings, tablet", size: { width: 820, height: 1180 }, reach: (page) => page.click("#open-settings") },
  { name: "drawer of the account, tablet", size: { width: 820, height: 1180 }, reach: async (page) => {
    await openPreset(page, DEVICE);
    await page.click("#open-account");
  } },
  { name: "sheet, phone", size: { width: 390, height: 844 }, reach: (page) => openPreset(page, DEVICE) },
  { name: "drawer of settings, phone", size: { width: 390, height: 844 }, reach: (page) => page.click("#open-settings") },
  { name: "drawer of the account, phone", size: { width: 390, height: 844 }, reach: (page) => page.click("#open-account") },
];

for (const { name, size, reach } of STATES) {
  test(`axe finds nothing serious: ${name}`, () => onPage(async (page) => {
    await reach(page);
    await settled(page);
    await check(page, name);
  }, size));
}

/** @type {{name: string, url: string, body: (text: string) => string}[]} */
const FAULTS = [
  { name: "the engine failed", url: "**/engine/worker.js", body: (text) => `${text}
    { const own = scope.onmessage; let n = 0;
      scope.onmessage = (e) => (e.data.op === "compute" && n++ > 0 ? scope.postMessage({ number: e.data.number, fault: "panic: for the test" }) : own(e)); }` },
  { name: "the engine could not be loaded", url: "**/engine/wasm_exec.js", body: () => "throw new Error('for the test')" },
];

for (const { name, url, body } of FAULTS) {
  test(`axe finds nothing serious: ${name}`, async () => {
    const { context, url: address } = await person();
    try {
      const page = await context.newPage();
      await page.route(url, async (r) => {
        const o = await r.fetch();
        await r.fulfill({ response: o, body: body(await o.text()) });
      });
      await page.goto(address);
      if (name === "the engine failed") {
        await settled(page);
        await page.fill(RATE, "88");
      }
      await page.waitForSelector("#fault:visible");
      await check(page, name);
    } finally {
      await context.close();
    }
  });
}
