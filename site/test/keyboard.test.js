// The main job without a pointer, and the list of keys against what the page does.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { settled } from "./host.js";
import { onPage, openPreset, RATE, stage, walkTo } from "./walk.js";
import { KEYS } from "../views/keys.js";

/** @typedef {import("playwright-core").Page} Page */

/** What has the focus, in words; empty where nothing has. @param {Page} page */
const focused = (page) => page.evaluate(() => {
  const e = document.activeElement;
  return !e || e === document.body ? "" : `${e.tagName.toLowerCase()}#${e.id} ${e.getAttribute("aria-label") ?? e.textContent?.slice(0, 40) ?? ""}`;
});

/** The single keys that a group of the list speaks of. @param {string} group */
function listed(group) {
  const rows = /** @type {[string, string[][]][]} */ (KEYS).find(([title]) => title === group)?.[1] ?? [];
  return rows.flatMap(([keys]) => keys.split(" ").map((k) => (k.length > 1 ? k.replace(",", "") : k))).map((k) => k.toLowerCase());
}

/** Every plain key that the page takes for itself while something has the focus. @param {Page} page @param {string} at */
const taken = (page, at) => page.evaluate((at) => {
  const target = at ? document.querySelector(at) : document.body;
  const out = [];
  for (const key of [..."abcdefghijklmnopqrstuvwxyz0123456789,.;/?+-=", "ArrowLeft", "ArrowRight", "Home", "End"]) {
    const e = new KeyboardEvent("keydown", { key, bubbles: true, cancelable: true });
    target?.dispatchEvent(e);
    if (e.defaultPrevented) out.push(key);
    for (const d of /** @type {NodeListOf<HTMLDialogElement>} */ (document.querySelectorAll("dialog[open]"))) d.close();
    if (key === "t") target?.dispatchEvent(new KeyboardEvent("keydown", { key: "Escape", bubbles: true, cancelable: true })); // leaves the presentation
  }
  return out;
}, at);

const SIGN = /** @type {Record<string, string>} */ ({ ArrowLeft: "←", ArrowRight: "→", "-": "−", "=": "+" });

describe("the keyboard", () => {
  stage();

  test("the list of keys is complete: what the timeline takes stands in it, and nothing else", () => onPage(async (page) => {
    await page.evaluate(() => {
      document.documentElement.requestFullscreen = async () => {};
      HTMLAnchorElement.prototype.click = () => {};
    });
    const all = new Set([...listed("On the timeline"), ...listed("Anywhere")]);
    const own = (await taken(page, "#timeline")).map((k) => (SIGN[k] ?? k).toLowerCase());
    for (const k of own) assert.ok(all.has(k), `${k} does something and is not listed`);
    for (const k of all) {
      if (/^(esc|shift|alt|ctrl|o|z)$/.test(k) && k !== "s") continue; // halves of others
      assert.ok(own.includes(k), `${k} is listed and does nothing`);
    }
  }));

  test("the main job needs no pointer, and the focus never falls off the page", () => onPage(async (page) => {
    const key = (/** @type {string} */ k) => page.keyboard.press(k);
    await key("Tab");
    assert.match(await focused(page), /Skip to the timeline/);
    await key("Enter");
    assert.match(await focused(page), /#timeline/);

    await key("p"); // a preset
    await page.keyboard.type("4:3");
    await key("Tab");
    await key("Enter");
    await settled(page);
    assert.notEqual(await focused(page), "", "after the choice of a preset");

    await key("/"); // a setting
    await page.keyboard.type("sinus rate");
    while (!(await page.evaluate((f) => document.activeElement?.matches(f), RATE))) await key("Tab");
    await key("ArrowUp");
    await key("Enter");
    await settled(page);

    await page.focus("#timeline");
    await walkTo(page, "block");
    const title = await page.textContent("#account h2");
    await page.waitForFunction((t) => document.querySelector("#said")?.textContent?.includes(String(t)), title);
    await key("c"); // its cause, then further by the Account
    await settled(page);
    await page.focus(".chain button.link, .led button.link");
    await key("Enter");
    await settled(page);
    await page.waitForFunction(() => document.activeElement !== document.body);

    await page.focus("#timeline");
    await key("b"); // an extra beat, moved and scanned
    await settled(page);
    await page.waitForSelector(".outcome:not([hidden])");
    await key("Alt+ArrowRight");
    await settled(page);
    await page.focus("#scan");
    await key("Enter");
    await page.waitForSelector(".segment");
    await page.waitForFunction(() => document.querySelector("#scan")?.textContent === "Scan the coupling", null, { timeout: 60000 });
    await page.focus(".segment");
    await key("Enter");
    await settled(page);
    await page.waitForFunction(() => document.activeElement !== document.body);

    await page.focus("#timeline");
    await key("k"); // before and after
    await key("/");
    await page.keyboard.press("Control+a");
    await page.keyboard.type("sinus rate");
    while (!(await page.evaluate((f) => document.activeElement?.matches(f), RATE))) await key("Tab");
    await key("Shift+ArrowUp");
    await key("Enter");
    await settled(page);
    await page.focus("#timeline");
    await key("Escape");
    await page.waitForSelector("table.contrast");

    await key("m"); // calipers
    await page.waitForFunction(() => document.activeElement?.getAttribute("data-leg") === "b_ms");
    await key("ArrowRight");
    await key("Escape");
    assert.match(await focused(page), /#timeline/);

    await key("Control+p"); // a print
    await page.waitForSelector(".print-picture:visible", { timeout: 60000 });
    const saved = page.waitForEvent("download", { timeout: 60000 });
    await key("Control+p");
    assert.match((await saved).suggestedFilename(), /\.pdf$/);
    await key("Escape");
    assert.match(await focused(page), /#timeline/);

    await key("t"); // presentation, and back
    await page.waitForSelector("#present-next:visible");
    await key("ArrowRight");
    await key("Escape");
    await page.waitForSelector("#timeline:visible");
    assert.match(await focused(page), /#timeline/);
  }));

  test("the name of every number shown tells its meaning and source, also by the keyboard", () => onPage(async (page) => {
    await openPreset(page, "dual-upper-rate-wenckebach");
    const dumb = await page.$$eval(".numbers dt, .sums dt, .counts dt, .intervals tbody th, .findings li", (all) => all.filter((e) => !(e.querySelector(".means")?.getAttribute("title") ?? "").match(/.+\(.+\)$/)).map((e) => e.textContent));
    assert.deepEqual(dumb, []);
    await page.focus(".numbers .means");
    await page.keyboard.press("ArrowDown");
    const told = await page.innerText(".meaning");
    assert.equal(told, await page.evaluate(() => `${document.activeElement?.textContent} ${document.activeElement?.getAttribute("title")}`));
    await page.click("#keep-before");
    await page.fill(RATE, "100");
    await settled(page);
    await page.waitForSelector("table.contrast");
    const rows = await page.$$eval("table.contrast tbody tr", (all) => all.filter((r) => r.querySelectorAll("td").length === 3 && !r.querySelector(".means")).map((r) => r.textContent));
    assert.deepEqual(rows, []);
  }));
});
