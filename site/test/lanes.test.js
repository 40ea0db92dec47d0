// The choice and the order of lanes.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { arrange, hide, laneName, shift, show, withLeads } from "../model/lanes.js";
import { FIRST_VIEW } from "../model/view.js";
import { settled } from "./host.js";
import { onPage, openPreset, stage } from "./walk.js";

const USUAL = FIRST_VIEW.lanes;

test("a lane is added where one would look for it", () => {
  for (const [lane, at] of /** @type {[string, number][]} */ ([["lead:V2", 4], ["egm:HRA", 4], ["membrane:his", 4]])) {
    assert.equal(show(USUAL, lane).indexOf(lane), at, lane);
  }
  assert.equal(show(show(USUAL, "egm:HRA"), "egm:RVA").indexOf("egm:RVA"), 5);
  assert.deepEqual(show(hide(USUAL, "axis"), "axis"), USUAL);
  assert.deepEqual(show(USUAL, "axis"), USUAL);
});

test("lanes move by one place and not beyond the ends", () => {
  assert.deepEqual(shift(["a", "b", "c"], "b", -1), ["b", "a", "c"]);
  const same = ["a", "b"];
  assert.equal(shift(same, "a", -1), same);
  assert.equal(shift(same, "b", 1), same);
  assert.equal(shift(same, "x", 1), same);
});

test("other leads leave the rest of the order alone", () => {
  assert.deepEqual(withLeads(["ladder", "lead:II", "egm:HRA", "axis"], ["II", "V1"]), ["ladder", "lead:II", "lead:V1", "egm:HRA", "axis"]);
  const v = arrange(FIRST_VIEW, ["ladder", "lead:V1", "lead:I"]);
  assert.deepEqual([v.leads, v.no_device], [["I", "V1"], true]);
});

test("names for people", () => {
  const known = [{ name: "membrane:his", label: "His bundle" }];
  assert.deepEqual(["lead:II", "egm:HISd", "egm:A", "membrane:his", "axis"].map((l) => laneName(l, known)), ["Lead II", "HISd", "EGM A", "AP His bundle", "Time axis"]);
});

describe("lanes on the page", () => {
  stage();

  /** @param {import("playwright-core").Page} page */
  const order = (page) => page.$$eval("#lanes .lane-order span", (all) => all.map((s) => s.textContent));

  test("are shown, moved by keyboard, hidden, and all of it is undone", () => onPage(async (page) => {
    const first = await settled(page);
    await page.click("#lanes summary");
    await page.check('#lanes input[value="egm:HISd"]');
    await settled(page);
    assert.deepEqual((await order(page)).slice(3, 6), ["Lead V6", "HISd", "Time axis"]);
    await page.focus('#lanes [aria-label="HISd: up"]');
    await page.keyboard.press("Enter");
    await page.keyboard.press("Enter");
    await settled(page);
    assert.deepEqual((await order(page)).slice(2, 4), ["HISd", "Lead V1"]);
    assert.equal(await page.evaluate(() => document.activeElement?.getAttribute("aria-label")), "HISd: up");
    await page.click('#lanes [aria-label="HISd: hide"]');
    await settled(page);
    assert.equal(await page.isChecked('#lanes input[value="egm:HISd"]'), false);
    await page.keyboard.press("Escape");
    for (let i = 0; i < 3; i++) await page.keyboard.press("Control+z");
    assert.equal(await settled(page), first);
    assert.deepEqual(await order(page), ["Lead I", "Lead II", "Lead V1", "Lead V6", "Time axis", "Ladder", "Device"]);
  }));

  test("twelve leads as on paper are chosen and let go of", () => onPage(async (page) => {
    await settled(page);
    await page.click(".toolbar .pop summary");
    await page.click('#papers >> text="6x2"');
    await settled(page);
    assert.match(await page.innerText(".toolbar .pop summary"), /6x2/);
    await page.click('#papers >> text="6x2"');
    await settled(page);
    assert.match(await page.innerText(".toolbar .pop summary"), /I, II, V1, V6/);
  }));

  test("the device's lane is in sight without scrolling", () => onPage(async (page) => {
    for (const size of [{ width: 1280, height: 800 }, { width: 1440, height: 900 }]) {
      await page.setViewportSize(size);
      await openPreset(page, "dual-endless-loop");
      await settled(page);
      const over = await page.$eval("#timeline", (p) => p.scrollHeight - p.clientHeight);
      assert.ok(over <= 1, `${over} px below the edge at ${size.width}`);
    }
  }));
});
