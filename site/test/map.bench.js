// How fast a map comes: 100 by 100 points of ten seconds on one engine and on two, from
// the press to the first results and to the last point. Prints; it judges nothing, for
// machines differ.
//
//     node site/test/map.bench.js

import { newPerson, openBrowser, openPage, serveSite, settled } from "./host.js";
import { openPreset } from "./walk.js";

const site = await serveSite();
const browser = await openBrowser();
try {
  const { page } = await openPage(await newPerson(browser.browser), site.url, { width: 1440, height: 900 });
  await settled(page);
  await openPreset(page, "map-upper-rate");
  await page.fill('[data-field="span_ms"]', "10000");
  await page.click("#tab-map");
  for (const [axis, from, to, step] of [["0", "81", "180", "1"], ["1", "202", "400", "2"]]) {
    for (const [key, value] of [["from", from], ["to", to], ["step", step]]) await page.locator(".axis").nth(Number(axis)).locator(`[data-axis="${key}"]`).fill(value);
  }
  await settled(page);
  for (const cores of ["1", "2", "1", "2"]) {
    await page.selectOption(".map-show select >> nth=1", cores).catch(() => console.log("this machine has one core"));
    await page.click("#map-run");
    await page.waitForFunction(() => document.querySelector("#map")?.getAttribute("data-run") === "done", null, { timeout: 300000 });
    const [says, first] = await page.evaluate(() => [document.querySelector(".map-says")?.textContent, document.querySelector("#map")?.getAttribute("data-first-ms")]);
    console.log(`${says} first=${first}ms`);
  }
} finally {
  await browser.stop();
  site.stop();
}
