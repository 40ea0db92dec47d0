// Where the time of one step of a drag goes: a strip of 30 s with twelve leads, a
// premature beat dragged in 200 steps with a real pointer, each step taken when the
// one before has been painted. Prints medians, 95th percentiles and shares; it judges
// nothing, for machines differ.
//
//     node site/test/frame.bench.js

import { newPerson, openBrowser, openPage, serveSite, settled } from "./host.js";
import { ringAt } from "./walk.js";

const STEPS = 200;
const PARTS = ["compute", "layout", "transfer", "read", "paint"];

/** @param {number[]} ms @param {number} q */
function quantile(ms, q) {
  const s = [...ms].sort((a, b) => a - b);
  return s[Math.min(s.length - 1, Math.floor(q * s.length))];
}

/** @param {import("playwright-core").Page} page */
const timings = (page) => page.evaluate(async () => {
  const at = "/base/timing.js"; // the page's own module
  return Object.fromEntries((await import(at)).timings);
});

const site = await serveSite();
const browser = await openBrowser();
try {
  const { page } = await openPage(await newPerson(browser.browser), site.url, { width: 1440, height: 900 });
  await settled(page);
  await page.fill('[data-field="span_ms"]', "30000");
  await page.keyboard.press("Enter");
  await page.click("text=+ premature beat");
  await page.click(".toolbar .pop summary");
  await page.click("text=all twelve");
  await page.keyboard.press("Escape");
  await settled(page);
  const ring = await ringAt(page);
  await page.mouse.move(ring.x, ring.y);
  await page.mouse.down();
  await page.evaluate(async () => (await import(String("/base/timing.js"))).timings.clear());
  for (let i = 0; i < STEPS; i++) {
    await page.mouse.move(ring.x - 6 - (i % 50) * 2, ring.y);
    await settled(page);
  }
  await page.mouse.up();
  const t = await timings(page);
  t.layout = t.engine.map((/** @type {number} */ ms, /** @type {number} */ i) => ms - t.compute[i]);
  const whole = t.engine.map((/** @type {number} */ _, /** @type {number} */ i) => PARTS.reduce((sum, p) => sum + (t[p][i] ?? 0), 0));
  const all = whole.reduce((/** @type {number} */ a, /** @type {number} */ b) => a + b, 0);
  console.log(`${whole.length} steps, budget 16.7 ms: median=${quantile(whole, 0.5).toFixed(1)}ms p95=${quantile(whole, 0.95).toFixed(1)}ms`);
  for (const p of PARTS) {
    const sum = t[p].reduce((/** @type {number} */ a, /** @type {number} */ b) => a + b, 0);
    console.log(`${p.padEnd(9)} median=${quantile(t[p], 0.5).toFixed(2)}ms p95=${quantile(t[p], 0.95).toFixed(2)}ms share=${((100 * sum) / all).toFixed(0)}%`);
  }
} finally {
  await browser.stop();
  site.stop();
}
