// What the walks through the page have in common: one server and one browser a
// file, a fresh page a walk.

import assert from "node:assert/strict";
import { after, before } from "node:test";
import { BRIEF, newPerson, openBrowser, openPage, serveSite, settled } from "./host.js";

/** @typedef {import("playwright-core").Page} Page */

export const AH = '[data-field="heart.av_node.fast.ah_ms"]';
export const RATE = '[data-field="heart.sinus.rate_bpm"]';

/** @type {Awaited<ReturnType<typeof serveSite>>} */
let site;
/** @type {Awaited<ReturnType<typeof openBrowser>>} */
let browser;

/** Starts server and browser before the tests of a file and ends them after. */
export function stage() {
  before(async () => {
    site = await serveSite();
    browser = await openBrowser(BRIEF);
  });
  after(async () => {
    await browser?.stop();
    site?.stop();
  });
}

/** A page of its own, for a walk that expects faults. */
export const barePage = async () => openPage(await newPerson(browser.browser), site.url);

/** A person's browser, and the address of the page. @param {import("playwright-core").BrowserContextOptions} [about] */
export const person = async (about) => ({ context: await newPerson(browser.browser, about), url: site.url });

/**
 * Runs a walk on a fresh page and demands that the console stayed empty and that
 * nothing was asked of another place.
 * @param {(page: Page) => Promise<void>} walk
 * @param {{width: number, height: number}} [size]
 */
export async function onPage(walk, size) {
  const { page, faults } = await openPage(await newPerson(browser.browser), site.url, size);
  try {
    await settled(page);
    await walk(page);
    assert.deepEqual(faults, []);
  } finally {
    await page.context().close();
  }
}

/** @param {Page} page @param {string} name */
export async function openPreset(page, name) {
  await page.click("#presets");
  await page.click(`[data-preset="${name}"]`);
  return settled(page);
}

/**
 * How much of the timeline's canvas is not paper, in thousandths, and how many
 * colours it has.
 * @param {Page} page
 */
export const ink = (page) => page.evaluate(() => {
  const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
  const copy = new OffscreenCanvas(canvas.width, canvas.height);
  const g = /** @type {OffscreenCanvasRenderingContext2D} */ (copy.getContext("2d", { willReadFrequently: true }));
  g.drawImage(canvas, 0, 0);
  const d = new Uint32Array(g.getImageData(0, 0, canvas.width, canvas.height).data.buffer);
  const colours = new Set();
  let other = 0;
  for (const c of d) {
    if (c !== d[0]) other++;
    if (colours.size < 50) colours.add(c);
  }
  return { share: (1000 * other) / d.length, colours: colours.size, marks: Number(canvas.dataset.marks) };
});

/**
 * Walks the events by key until one whose account speaks of something.
 * @param {Page} page @param {string} words that the account's title must have
 */
export async function walkTo(page, words) {
  await page.focus("#timeline");
  for (let i = 0; i < 80; i++) {
    await page.keyboard.press(".");
    await settled(page);
    if ((await page.textContent("#account h2"))?.toLowerCase().includes(words)) return;
  }
  assert.fail(`no event whose account speaks of ${words}`);
}

/**
 * A place in a ring of a stimulus, in pixels of the window: the only thing in the
 * device's colour on a strip without a device.
 * @param {Page} page
 */
export async function ringAt(page) {
  const box = await page.locator("#timeline canvas").boundingBox();
  const ring = await page.evaluate(() => {
    const from = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
    const copy = new OffscreenCanvas(from.width, from.height);
    const g = /** @type {OffscreenCanvasRenderingContext2D} */ (copy.getContext("2d", { willReadFrequently: true }));
    g.drawImage(from, 0, 0);
    const d = g.getImageData(0, 0, copy.width, copy.height).data;
    for (let i = 0; i < d.length; i += 4) {
      if (d[i] === 0x34 && d[i + 1] === 0x47 && d[i + 2] === 0xb5) return { x: (i / 4) % copy.width, y: Math.floor(i / 4 / copy.width) };
    }
    return null;
  });
  assert.ok(box && ring, "no ring was found");
  return { x: box.x + ring.x, y: box.y + ring.y + 2 };
}

/** What a field of the settings holds. @param {Page} page @param {string} path */
export const value = (page, path) => page.inputValue(`[data-field="${path}"]`);

/**
 * Moves the pointer over a part of the sheet until the tip begins with some words.
 * @param {Page} page @param {string} words @param {{from?: number, to?: number, top?: number}} [where] in shares of the sheet
 */
export async function findHandle(page, words, { from = 0.45, to = 0.8, top = 0.4 } = {}) {
  const box = await page.locator("#timeline canvas").boundingBox();
  assert.ok(box);
  const spot = await page.evaluate(({ words, from, to, top }) => {
    const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
    const tip = /** @type {HTMLElement} */ (document.querySelector(".tip"));
    const b = canvas.getBoundingClientRect();
    const pane = /** @type {HTMLElement} */ (document.querySelector("#timeline"));
    const foot = Math.min(b.bottom, pane.getBoundingClientRect().bottom) - 3; // what is scrolled away cannot be taken hold of
    for (let y = foot; y > b.top + top * b.height; y -= 3) {
      for (let x = b.left + from * b.width; x < b.left + to * b.width; x += 4) {
        canvas.dispatchEvent(new PointerEvent("pointermove", { clientX: x, clientY: y, pointerType: "mouse", pointerId: 1, bubbles: true }));
        if (!tip.hidden && tip.textContent?.startsWith(words)) return { x, y };
      }
    }
    return null;
  }, { words, from, to, top });
  assert.ok(spot, `nothing on the sheet moves ${words}`);
  await page.mouse.move(spot.x, spot.y);
  assert.ok((await page.innerText(".tip")).startsWith(words));
  return spot;
}

/** Presses twice on an empty place in the upper part of the ladder. @param {Page} page @param {number} share of the sheet's width */
export async function tryBeat(page, share) {
  const box = await page.locator("#timeline canvas").boundingBox();
  assert.ok(box);
  const spot = await page.evaluate(({ share }) => {
    const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
    const ghost = /** @type {HTMLElement} */ (document.querySelector(".ghost"));
    const b = canvas.getBoundingClientRect();
    const x = b.left + share * b.width;
    for (let y = b.top + 0.3 * b.height; y < b.bottom; y += 6) {
      canvas.dispatchEvent(new PointerEvent("pointermove", { clientX: x, clientY: y, pointerType: "mouse", pointerId: 1, bubbles: true }));
      if (!ghost.hidden) return { x, y };
    }
    return null;
  }, { share });
  assert.ok(spot, "no empty place in a tier");
  await page.mouse.click(spot.x, spot.y);
  await settled(page);
  assert.equal(await page.isVisible("#deselect"), false, "one press selects nothing and tries nothing");
  await page.mouse.click(spot.x, spot.y);
  await settled(page);
  await page.waitForSelector(".outcome:not([hidden])");
}
