// What is taken hold of on the timeline: handles, their values, flips, extra beats.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { settled } from "./host.js";
import { findHandle, onPage, openPreset, stage, tryBeat, value } from "./walk.js";

describe("handles", () => {
  stage();

  test("the end of PVARP is dragged: value at the pointer, one step to undo, the flip is found to 1 ms", () => onPage(async (page) => {
    await openPreset(page, "dual-treadmill-two-to-one");
    const first = await settled(page);
    const at = await findHandle(page, "PVARP");
    assert.equal(await page.locator(".over-handle").count(), 1);
    await page.mouse.down();
    for (let i = 1; i <= 8; i++) {
      await page.mouse.move(at.x - 2 * i, at.y);
      await settled(page);
    }
    assert.match(await page.innerText(".tip"), /^PVARP \d+ ms/);
    await page.waitForFunction(() => {
      const f = /** @type {HTMLElement | null} */ (document.querySelector(".flip:not(.rough)"));
      return f && Number(f.dataset.high) - Number(f.dataset.low) === 1;
    });
    await page.mouse.up();
    assert.notEqual(await settled(page), first);
    const moved = Number(await value(page, "pacemaker.pvarp_ms"));
    assert.ok(moved < 300 && moved >= 100, `PVARP ${moved}`);
    assert.match(await page.innerText("#account h2"), /PVARP/);
    await page.keyboard.press("Control+z");
    assert.equal(await settled(page), first);
  }));

  test("Escape puts back what is being dragged and leaves nothing to undo", () => onPage(async (page) => {
    await openPreset(page, "dual-one-to-one-to-140");
    const first = await settled(page);
    const at = await findHandle(page, "sensed AV delay");
    await page.mouse.down();
    await page.mouse.move(at.x + 12, at.y, { steps: 4 });
    assert.notEqual(await settled(page), first);
    await page.keyboard.press("Escape");
    assert.equal(await settled(page), first);
    await page.mouse.up();
    assert.equal(await settled(page), first);
  }));

  test("a P dragged to the right slows the sinus, and the same P stays under the pointer", () => onPage(async (page) => {
    await settled(page);
    const at = await findHandle(page, "sinus rate", { from: 0.5, to: 0.9, top: 0.2 });
    await page.mouse.down();
    await page.mouse.move(at.x + 30, at.y, { steps: 6 });
    await settled(page);
    const sign = await page.locator(".grip-sign").boundingBox();
    assert.ok(sign && Math.abs(sign.x + sign.width / 2 - at.x - 30) < 9, "the handle follows the pointer");
    await page.mouse.up();
    await settled(page);
    assert.ok(Number(await value(page, "heart.sinus.rate_bpm")) < 75);
  }));

  test("a value at the end of its range says so", () => onPage(async (page) => {
    await openPreset(page, "dual-one-to-one-to-140");
    const at = await findHandle(page, "sensed AV delay", { from: 0.3, to: 0.6 });
    await page.mouse.down();
    await page.mouse.move(at.x + 200, at.y, { steps: 4 });
    await settled(page);
    assert.match(await page.innerText(".tip"), /400 ms, the most that is allowed/);
    await page.keyboard.press("Escape");
    await page.mouse.up();
  }));

  test("a finger drags too", () => onPage(async (page) => {
    await openPreset(page, "dual-one-to-one-to-140");
    const first = await settled(page);
    const at = await findHandle(page, "PVARP");
    const touch = await page.context().newCDPSession(page);
    const points = (/** @type {number} */ x) => [{ x, y: at.y }];
    await touch.send("Input.dispatchTouchEvent", { type: "touchStart", touchPoints: points(at.x) });
    for (let i = 1; i <= 6; i++) await touch.send("Input.dispatchTouchEvent", { type: "touchMove", touchPoints: points(at.x + 4 * i) });
    await touch.send("Input.dispatchTouchEvent", { type: "touchEnd", touchPoints: [] });
    assert.notEqual(await settled(page), first);
    assert.ok(Number(await value(page, "pacemaker.pvarp_ms")) > 250);
  }));

  test("Alt with an arrow moves the selected window by steps, and Shift by ten", () => onPage(async (page) => {
    await openPreset(page, "dual-one-to-one-to-140");
    const before = Number(await value(page, "pacemaker.pvarp_ms"));
    const at = await findHandle(page, "PVARP");
    await page.mouse.click(at.x, at.y);
    await settled(page);
    assert.match(await page.innerText("#account h2"), /PVARP/);
    await page.focus("#timeline");
    await page.keyboard.press("Alt+ArrowRight");
    await settled(page);
    assert.equal(Number(await value(page, "pacemaker.pvarp_ms")), before + 5);
    await page.keyboard.press("Alt+Shift+ArrowLeft");
    await settled(page);
    assert.equal(Number(await value(page, "pacemaker.pvarp_ms")), before - 45);
    await page.keyboard.press("Control+z"); // the two are one step only where they follow each other at once
    await settled(page);
    if (Number(await value(page, "pacemaker.pvarp_ms")) !== before) await page.keyboard.press("Control+z");
    await settled(page);
    assert.equal(Number(await value(page, "pacemaker.pvarp_ms")), before);
  }));
});

describe("an extra beat", () => {
  stage();

  test("two presses try a beat, its outcome is told, and undo takes it away", () => onPage(async (page) => {
    const first = await settled(page);
    await tryBeat(page, 0.62);
    assert.notEqual(await settled(page), first);
    assert.match(await page.innerText(".outcome"), /captur|conducted|blocked/);
    assert.match(await page.innerText(".trial"), /\d+ ms/);
    await page.keyboard.press("Control+z");
    assert.equal(await settled(page), first);
  }));

  test("its coupling is scanned, and a press on a segment puts the beat there", () => onPage(async (page) => {
    await tryBeat(page, 0.62);
    await page.click("#scan");
    await page.waitForFunction(() => document.querySelector("#scan")?.textContent === "Scan the coupling" && document.querySelectorAll(".segment").length > 2);
    const segments = await page.locator(".segment .at").allInnerTexts();
    const last = segments.map((s) => Number(s.match(/\d+/g)?.at(-1)));
    const from = segments.map((s) => Number(s.match(/\d+/g)?.[0]));
    for (let i = 1; i < from.length; i++) assert.equal(from[i] - last[i - 1], 1, `${segments}`);
    await page.locator(".segment[data-slug^=conducted]").last().click();
    await settled(page);
    await page.waitForFunction(() => document.querySelector(".outcome")?.textContent?.startsWith("conducted"));
  }));

  test("B tries an atrial beat without a pointer, Shift B a ventricular one", () => onPage(async (page) => {
    await page.focus("#timeline");
    await page.keyboard.press("b");
    await settled(page);
    await page.waitForSelector(".outcome:not([hidden])");
    await page.keyboard.press("Shift+B");
    await settled(page);
    assert.equal(await page.locator('[data-field$=".at_ms"]').count(), 2);
  }));
});

describe("why not", () => {
  stage();

  test("the measure of a long gap tells which interval ran and what began it", () => onPage(async (page) => {
    await openPreset(page, "vvi-hysteresis");
    await page.focus("#timeline");
    await page.keyboard.press("0");
    await settled(page);
    await page.keyboard.press("g");
    await page.waitForFunction(() => document.querySelector("#account h2")?.textContent?.startsWith("Why no stimulus"));
    assert.match(await page.innerText(".account-body"), /lower-rate interval began/i);
    await page.locator("[data-setting]").first().click();
    assert.match(await page.evaluate(() => document.activeElement?.getAttribute("data-field") ?? ""), /^pacemaker\./);
  }));
});
