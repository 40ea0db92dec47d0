// The pacemaker on the page: its lane, its settings, its arithmetic.

import assert from "node:assert/strict";
import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, test } from "node:test";
import { ROOT, settled } from "./host.js";
import { ink, onPage, openPreset, RATE, stage } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

const field = (/** @type {string} */ name) => `[data-field="pacemaker.${name}"]`;
const row = (/** @type {string} */ name) => `[data-path="pacemaker.${name}"]`;
const DEVICE_LANE = '#lanes input[value="device"]';
const OFF = '.row.group[data-path="pacemaker"] input';

/** @param {Page} page */
async function withDevice(page) {
  await page.uncheck(OFF);
  return settled(page);
}

/** A heart that neither conducts down nor back, so that the device alone decides. @param {Page} page */
async function block(page) {
  await page.check('[data-path="heart.av_node.fast.ah_ms"] .off input');
  await page.check('[data-path="heart.av_node.fast.va_ms"] .off input');
  return settled(page);
}

describe("the pacemaker", () => {
  stage();

  test("is switched on, draws its lane, and is switched off and on again with what was typed", () => onPage(async (page) => {
    await block(page);
    const first = await settled(page);
    const before = (await ink(page)).marks;
    assert.equal(await page.isVisible(field("pvarp_ms")), false);
    assert.equal(await page.isDisabled(DEVICE_LANE), true);
    const paced = await withDevice(page);
    assert.notEqual(paced, first);
    assert.ok((await ink(page)).marks > before + 20);
    assert.match(await page.innerText("#statement"), /DDD/);
    await page.fill(field("sensed_av_ms"), "120");
    const typed = await settled(page);
    assert.notEqual(typed, paced);
    await page.check(OFF);
    assert.equal(await settled(page), first);
    assert.equal(await page.isVisible(field("pvarp_ms")), false);
    await page.uncheck(OFF);
    assert.equal(await settled(page), typed);
    assert.equal(await page.inputValue(field("sensed_av_ms")), "120");
  }));

  test("its lane can be hidden", () => onPage(async (page) => {
    const print = await withDevice(page);
    const before = (await ink(page)).marks;
    await page.click("#lanes summary");
    await page.uncheck(DEVICE_LANE);
    await settled(page);
    assert.ok((await ink(page)).marks < before);
    await page.check(DEVICE_LANE);
    assert.equal(await settled(page), print);
    assert.equal((await ink(page)).marks, before);
  }));

  test("what the plan does not state is assumed, and can be left out again", () => onPage(async (page) => {
    const first = await withDevice(page);
    assert.equal(await page.inputValue(field("pvarp_ms")), "");
    assert.equal(await page.getAttribute(field("pvarp_ms"), "placeholder"), "250");
    assert.equal(await page.isVisible(`${row("pvarp_ms")} .assumed`), true);
    await page.fill(field("pvarp_ms"), "250");
    await page.press(field("pvarp_ms"), "Enter");
    assert.equal(await page.isVisible(`${row("pvarp_ms")} .assumed`), false);
    await page.click(`${row("pvarp_ms")} .reset`);
    assert.equal(await settled(page), first); // the last value taken out leaves a device
    assert.equal(await page.isVisible(`${row("pvarp_ms")} .assumed`), true);
    await page.click("text=Crosstalk");
    assert.equal(await page.isChecked(field("safety_stimulus")), true);
    await page.uncheck(field("safety_stimulus"));
    await settled(page);
    assert.match(await page.innerText("#account ul.doubts"), /safety stimulus is off/i);
    await page.click(`${row("safety_stimulus")} .reset`);
    await settled(page);
    assert.equal(await page.isChecked(field("safety_stimulus")), true);
  }));

  test("PVARP changes the timeline, and the arithmetic warns of 2:1 below the upper tracking rate", () => onPage(async (page) => {
    await block(page);
    await withDevice(page);
    await page.fill(RATE, "130");
    const first = await settled(page);
    const tarp = () => page.evaluate(() => document.querySelector('[data-sum="tarp"]')?.nextElementSibling?.textContent);
    assert.equal(await tarp(), "400 ms"); // 150 + 250
    assert.equal(await page.locator("#account ul.doubts").count(), 0);
    await page.fill(field("pvarp_ms"), "400");
    assert.notEqual(await settled(page), first);
    assert.equal(await tarp(), "550 ms"); // 150 + 400
    assert.match(await page.innerText("#account ul.doubts"), /TARP of 550 ms is longer than the upper-rate interval of 500 ms: 2:1 begins at 109\.1\/min/);
    assert.match(await page.innerText("#account .sums"), /SAV \+ PVARP: 150 \+ 400 = 550 ms/);
    assert.match(await page.innerText("#account .counts"), /ventricle paced\s+100 %/);
    assert.equal(await page.isVisible("#show-doubts"), false);
    await page.focus("#timeline");
    await page.keyboard.press(".");
    await settled(page);
    await page.click("#show-doubts");
    await settled(page);
    assert.equal(await page.isVisible("#account ul.doubts"), true);
  }));

  test("a wrong mode is told at its field, a right one in small letters is taken", () => onPage(async (page) => {
    const first = await withDevice(page);
    await page.fill(field("mode"), "DXD");
    await page.waitForSelector(`${row("mode")}.wrong`);
    assert.match(await page.innerText(`${row("mode")} .row-fault`), /pacemaker\.mode: "DXD"; allowed: .*position 2 is the chamber sensed/);
    assert.equal(await settled(page), first);
    await page.fill(field("mode"), "vvi");
    await page.waitForSelector(`${row("mode")}.wrong`, { state: "detached" });
    assert.notEqual(await settled(page), first);
    assert.equal(await page.innerText(`${row("pvarp_ms")} .assumed`), "not used");
    assert.equal(await page.innerText(`${row("lower_rate_bpm")} .assumed`), "assumed");
    assert.equal(await page.locator("#modes-pacemaker\\.mode option").count() >= 14, true);
    await page.fill(field("mode"), "");
    assert.equal(await settled(page), first);
  }));

  test("its faults and signals from outside are interventions", () => onPage(async (page) => {
    assert.equal(await page.isVisible("text=+ loss of capture"), false);
    await block(page);
    let last = await withDevice(page);
    for (const [i, name] of ["loss of capture", "undersensing", "broken lead", "dislodged lead", "signals from outside"].entries()) {
      await page.click(`text=+ ${name}`);
      const next = await settled(page);
      assert.equal(await page.locator(".row.wrong").count(), 0, name);
      assert.ok(["A", "V"].includes(await page.inputValue(`[data-field="interventions[${i}].channel"]`)));
      if (name === "undersensing") await page.selectOption(`[data-field="interventions[${i}].channel"]`, "A");
      assert.notEqual(await settled(page), last, name);
      last = next;
    }
    assert.match(await page.innerText("#account .counts"), /VP without capture/);
    await page.click("text=+ change");
    await page.selectOption('[data-field="interventions[5].field"]', "pacemaker.lower_rate_bpm");
    await page.fill('[data-field="interventions[5].to"]', "95");
    assert.notEqual(await settled(page), last);
    assert.equal(await page.locator(".row.wrong").count(), 0);
  }));

  test("its settings are saved as a table and read back; what is not stated is told", () => onPage(async (page) => {
    await block(page);
    await withDevice(page);
    await page.fill(field("lower_rate_bpm"), "85");
    const typed = await settled(page);
    const [download] = await Promise.all([page.waitForEvent("download"), page.click("text=Save table")]);
    const table = await readFile(await download.path(), "utf8");
    assert.match(table, /MDC_IDC_SET_BRADY_LOWRATE,730880,pacemaker.lower_rate_bpm,85,\/min/);
    assert.match(table, /pacemaker.pvarp_ms,not stated,ms/);
    await page.fill(field("lower_rate_bpm"), "60");
    assert.notEqual(await settled(page), typed);
    await page.setInputFiles('[aria-label="Table of settings"]', { name: "report.csv", mimeType: "text/csv", buffer: Buffer.from(table) });
    await page.waitForFunction(() => document.querySelector(".table-said")?.textContent?.startsWith("report.csv was read"));
    assert.equal(await settled(page), typed);
    await page.setInputFiles('[aria-label="Table of settings"]', { name: "bad.csv", mimeType: "text/csv", buffer: Buffer.from("mode,VVI\n") });
    await page.waitForFunction(() => document.querySelector(".table-said.wrong"));
    assert.match(await page.innerText(".table-said"), /bad.csv was not read. line 1/);
    assert.equal(await settled(page), typed);
  }));

  test("nothing sticks out and the sheet is filled, from desk to tablet", () => onPage(async (page) => {
    await page.click("#presets");
    const names = await page.$$eval("[data-preset]", (all) => all.map((b) => b.getAttribute("data-preset") ?? "").filter((n) => /^(dual|vvi|crt|aai)/.test(n)).slice(0, 4));
    await page.keyboard.press("Escape");
    for (const size of [{ width: 1280, height: 800 }, { width: 1600, height: 1000 }, { width: 820, height: 1180 }]) {
      await page.setViewportSize(size);
      for (const name of names) {
        await openPreset(page, name);
        await page.screenshot({ path: join(ROOT, "site", "test", "shots", `device-${size.width}-${name}.png`) });
        assert.equal(await page.isDisabled(DEVICE_LANE), false, name);
        assert.equal(await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth), 0);
        const wide = await page.evaluate(() => {
          const c = /** @type {HTMLElement} */ (document.querySelector("#timeline canvas"));
          return c.getBoundingClientRect().width / /** @type {HTMLElement} */ (c.closest("#timeline")).clientWidth;
        });
        assert.ok(wide > 0.97 && wide <= 1.01, `${name} fills ${wide} of the sheet at ${size.width}`);
      }
    }
  }));
});
