// Five first-time walks: what someone who has never seen the page does with a strip in
// hand, by pointer and keys, and the words and numbers that must meet them. With
// WALK_SHOTS set to a folder every step leaves a picture there.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { join } from "node:path";
import { settled } from "./host.js";
import { findHandle, onPage, openPreset, stage, tryBeat, value } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

const WIDE = { width: 1440, height: 900 };

/** A step has been made. @param {Page} page @param {string} name */
async function step(page, name) {
  await settled(page);
  if (process.env.WALK_SHOTS) await page.screenshot({ path: join(process.env.WALK_SHOTS, `${name}.png`) });
}

/** The last step, on smaller screens and on the dark sheet. @param {Page} page @param {string} name */
async function last(page, name) {
  await step(page, name);
  if (!process.env.WALK_SHOTS) return;
  for (const [width, height] of [[1280, 800], [820, 1180]]) {
    for (const colorScheme of /** @type {const} */ (["light", "dark"])) {
      await page.setViewportSize({ width, height });
      const button = page.locator(`.tools button:text-is("${colorScheme === "dark" ? "Dark" : "Light"}")`);
      if (await button.isVisible()) await button.click();
      await step(page, `${name}-${width}-${colorScheme}`);
    }
  }
}

/** Types a value over the old one and leaves the field. @param {Page} page @param {string} path @param {string} text */
async function type(page, path, text) {
  await page.click(`[data-field="${path}"]`);
  await page.keyboard.press("Control+a");
  await page.keyboard.type(text);
  await page.keyboard.press("Enter");
  await settled(page);
}

/** Text as one line. @param {Page} page @param {string} at */
const read = async (page, at) => (await page.innerText(at)).replace(/\s+/g, " ");

/**
 * Drags from a place until a condition on the page holds.
 * @param {Page} page @param {{x: number, y: number}} from @param {number} dx a move @param {() => Promise<boolean>} done
 */
async function dragUntil(page, from, dx, done) {
  await page.mouse.move(from.x, from.y);
  await page.mouse.down();
  for (let i = 1; i < 60; i++) {
    await page.mouse.move(from.x + i * dx, from.y, { steps: 2 });
    await settled(page);
    if (await done()) break;
  }
  assert.ok(await done(), `dragging led to: ${await page.innerText(".tip")}`);
}

/** Presses on the sheet, from left to right, until the account's title is one. @param {Page} page @param {RegExp} title @param {{from?: number, to?: number, top: number, foot: number, dx?: number}} where in shares of the sheet */
async function pressOn(page, title, { from = 0.1, to = 0.95, top, foot, dx = 7 }) {
  const box = await page.locator("#timeline canvas").boundingBox();
  assert.ok(box);
  const seen = new Set();
  for (let y = box.y + top * box.height; y < box.y + foot * box.height; y += 8) {
    for (let x = box.x + from * box.width; x < box.x + to * box.width; x += dx) {
      await page.mouse.move(x, y);
      const free = await page.evaluate(([x, y]) => document.querySelector(".hair.snapped") !== null && document.elementFromPoint(x, y)?.tagName === "CANVAS", [x, y]);
      if (!free) continue;
      await page.mouse.click(x, y);
      await settled(page);
      const said = await page.innerText("#account h2");
      if (title.test(said)) return;
      seen.add(said);
    }
  }
  assert.fail(`nothing pressed on is ${title}; seen: ${[...seen].join("; ")}`);
}

describe("a first-time walk", () => {
  stage();

  test("1: a treadmill strip drops from 130 to 65, and is made to hold at 150", () => onPage(async (page) => {
    await page.click("#presets");
    await step(page, "1-presets");
    await page.keyboard.type("treadmill");
    await page.click('[data-preset="dual-treadmill-two-to-one"]');
    await step(page, "1a-preset");
    assert.match(await read(page, "#statement"), /tracked 2:1/);
    assert.match(await read(page, "#account"), /2:1 begins at 130\.4\/min and the upper tracking rate of 140\/min is never reached/);

    await type(page, "pacemaker.lower_rate_bpm", "60");
    await type(page, "pacemaker.sensed_av_ms", "160");
    await type(page, "pacemaker.pvarp_ms", "300");
    await type(page, "pacemaker.max_tracking_rate_bpm", "120");
    await step(page, "1b-typed");
    assert.match(await read(page, "#account"), /2:1 point 130\.4 \/min/);
    assert.match(await read(page, "#account"), /Wenckebach behaviour of the device at its upper rate/);

    // The rate of the end of the exercise, by the P there.
    await page.focus("#timeline");
    await page.keyboard.press("End");
    await settled(page);
    const p = await findHandle(page, "sinus rate", { from: 0.7, to: 0.98, top: 0.2 });
    const rate = async () => Number(/sinus rate[^\d]*([\d.]+)/.exec(await page.innerText(".tip"))?.[1]);
    await dragUntil(page, p, -3, async () => (await rate()) >= 149.5);
    await step(page, "1c-dragged");
    await page.mouse.up();
    await type(page, "interventions[0].to", "150");
    await step(page, "1d-150");
    assert.match(await read(page, "#statement"), /sinus 1(49|50)\/min tracked 3:2 at the upper rate .*also tracked 2:1/);

    await pressOn(page, /refractory/i, { top: 0.75, foot: 1, from: 0.5 });
    await step(page, "1e-why");
    assert.match(await read(page, ".account-body"), /PVARP/);
    assert.match(await read(page, ".account-body"), /\d+ ms (later|earlier|after|before|too)/);
    await page.click("#deselect");

    await page.click("#keep-before");
    await type(page, "pacemaker.max_tracking_rate_bpm", "150");
    await page.hover("#timeline canvas");
    await page.mouse.wheel(0, 900); // the device of the lower strip
    await page.waitForFunction(() => { const p = /** @type {HTMLElement} */ (document.querySelector("#timeline")); return p.scrollTop + p.clientHeight > p.scrollHeight - 2; });
    const end = await findHandle(page, "PVARP", { from: 0.4, to: 0.95, top: 0.5 });
    await dragUntil(page, end, -2, async () => /tracked 1:1/.test(await page.innerText("#statement")));
    await step(page, "1f-held");
    await page.mouse.up();
    await settled(page);
    const pvarp = Number(await value(page, "pacemaker.pvarp_ms"));
    assert.ok(pvarp <= 240 && pvarp > 150, `PVARP ${pvarp}: SAV 160 + PVARP is no longer than 60000 / 150 = 400 ms`);
    await page.waitForFunction(() => document.querySelector("#account h2")?.textContent?.startsWith("PVARP"));
    await page.click("#deselect");
    await page.waitForFunction(() => document.querySelector("#account h2")?.textContent === "Differences");
    assert.match(await read(page, "#account"), /test VA conduction/);
    await last(page, "1g-warned");
    await page.setViewportSize(WIDE);

    await page.click("#print");
    await page.selectOption("#print-print", "comparison");
    await page.waitForSelector(".print-picture:not([hidden])", { timeout: 120000 });
    await step(page, "1h-print");
    const saving = page.waitForEvent("download", { timeout: 120000 });
    await page.click("#print-save");
    assert.match((await saving).suggestedFilename(), /\.pdf$/);
  }, WIDE));

  test("2: a fellow clicks the block of a Wenckebach, reads by how much it missed, and drags a beat in", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await step(page, "2a-preset");
    const first = await settled(page);
    await pressOn(page, /blocked/i, { top: 0.45, foot: 0.85 });
    await step(page, "2b-block");
    assert.match(await read(page, ".account-body"), /reached the fast pathway of the AV node \d+ ms after the last one had left it .*; it needed \d+ ms: blocked, \d+ ms short/);
    await page.keyboard.press("Escape");
    await page.click("#deselect").catch(() => {});
    await tryBeat(page, 0.3);
    await step(page, "2c-beat");
    assert.notEqual(await settled(page), first);
    const at = Number(await value(page, "interventions[0].at_ms"));
    const ring = await findHandle(page, "stimulus", { from: 0.1, to: 0.6, top: 0.3 });
    const before = await settled(page);
    await dragUntil(page, ring, -4, async () => (await settled(page)) !== before && Number(await value(page, "interventions[0].at_ms")) < at - 100);
    await step(page, "2d-dragging");
    await page.mouse.up();
    await settled(page);
    assert.match(await read(page, "#account"), /\d+ ms after/);
    await last(page, "2e-shifted");
  }, WIDE));

  test("3: a nurse clicks a gap of 1.2 s and reads which interval ran and what began it", () => onPage(async (page) => {
    await openPreset(page, "vvi-hysteresis");
    await step(page, "3a-preset");
    assert.match(await read(page, "#statement"), /hysteresis pause of 1200 ms/);
    const box = await page.locator("#timeline canvas").boundingBox();
    assert.ok(box);
    // An empty place between the fifth beat and the first stimulus, among the ventricles.
    const spot = await page.evaluate(() => {
      const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
      const ghost = /** @type {HTMLElement} */ (document.querySelector(".ghost"));
      const hair = /** @type {HTMLElement} */ (document.querySelector(".hair-time"));
      const b = canvas.getBoundingClientRect();
      for (let y = b.bottom - 3; y > b.top + 0.4 * b.height; y -= 6) {
        for (let x = b.left + 60; x < b.right; x += 6) {
          canvas.dispatchEvent(new PointerEvent("pointermove", { clientX: x, clientY: y, pointerType: "mouse", pointerId: 1, bubbles: true }));
          const t = parseFloat(hair.textContent ?? "");
          if (!ghost.hidden && t > 5.1 && t < 5.4) return { x, y };
        }
      }
      return null;
    });
    assert.ok(spot, "no empty place in the gap");
    await page.mouse.click(spot.x, spot.y);
    await page.waitForFunction(() => document.querySelector("#account h2")?.textContent?.startsWith("Why no stimulus"));
    await step(page, "3b-gap");
    const said = await read(page, ".account-body");
    assert.match(said, /1200 ms/);
    assert.match(said, /hysteresis/i);
    assert.match(said, /began/i);
    await last(page, "3c-gap");
  }, WIDE));

  test("4: a registrar sees two hearts answer the same ventricular train one above the other", () => onPage(async (page) => {
    await openPreset(page, "avrt-overdrive");
    await step(page, "4a-first");
    await page.click("#keep-before");
    await settled(page);
    await openPreset(page, "avnrt-overdrive");
    await page.waitForFunction(() => /PPI/.test(document.querySelector("table.contrast")?.textContent ?? ""));
    await step(page, "4b-both");
    const row = page.locator('table.contrast tr:has-text("ventricular overdrive")');
    assert.match((await row.innerText()).replace(/\s+/g, " "), /PPI - TCL 90 ms.*PPI - TCL 188 ms/);
    const seen = await row.boundingBox();
    assert.ok(seen && seen.y + seen.height < 900, "both are read without scrolling");
    await page.focus("#timeline");
    await page.keyboard.press("0");
    await settled(page);
    await last(page, "4c-whole");
  }, WIDE));

  test("5: a teacher hides what comes next and reveals it beat by beat", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await page.click("summary:text('File')");
    await step(page, "5a-menu");
    await page.click("#file-present");
    await step(page, "5b-covered");
    const asked = await page.innerText(".ask");
    assert.match(asked, /^What comes after \d+\.\d\d s\?$/);
    assert.equal(await page.isHidden("#statement"), true);
    await page.keyboard.press("Space");
    await step(page, "5c-next");
    assert.notEqual(await page.innerText(".ask"), asked);
    for (let i = 0; i < 40 && !/4:3 AV block/.test(await page.innerText(".ask")); i++) {
      await page.keyboard.press("Space");
      await settled(page);
    }
    assert.match(await page.innerText(".ask"), /4:3 AV block/);
    await last(page, "5d-all");
    await page.keyboard.press("Escape");
    await settled(page);
    assert.equal(await page.isVisible("#statement"), true);
  }, WIDE));
});
