// The sheet as a picture for elsewhere, with its title and the caution on it; and the
// page over the whole screen.

import { PX_PER_MM } from "../base/scale.js";
import { fileName, titleOf } from "../model/document.js";
import { download } from "./file.js";
import { paint } from "./paint.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("./notice.js").Notices} Notices
 */

const SHARP = 2; // pixels of the picture a CSS pixel, at least
const EDGE = 6; // mm around
const TITLE = 5; // mm, height of letters
const SMALL = 2.6;

/**
 * Breaks a text into lines that fit.
 * @param {CanvasRenderingContext2D} g
 * @param {string} text
 * @param {number} width
 */
function lines(g, text, width) {
  /** @type {string[]} */
  const out = [""];
  for (const word of text.split(" ")) {
    const longer = `${out[out.length - 1]} ${word}`.trim();
    if (g.measureText(longer).width <= width) out[out.length - 1] = longer;
    else out.push(word);
  }
  return out;
}

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 * @param {Notices} notices
 */
export function pictureView(store, catalogue, notices) {
  /** The sheet as it is shown, drawn anew. @returns {Promise<Blob> | null} */
  function picture() {
    const { scene, answer, plan, dark, present } = store.get();
    if (!scene || !answer || present) return null;
    const canvas = document.createElement("canvas");
    const g = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
    const styles = dark ? catalogue.styles.dark : catalogue.styles.light;
    const family = getComputedStyle(document.body).fontFamily;
    const k = PX_PER_MM * Math.max(SHARP, window.devicePixelRatio || 1);
    const caution = document.querySelector(".caution")?.textContent?.trim() ?? "";
    const says = answer.statement.map((c) => c.text).join("");
    const font = (/** @type {number} */ mm, weight = 400) => { g.font = `${weight} ${mm}px ${family}`; };
    font(SMALL * 1.25);
    const statement = lines(g, says, scene.width);
    font(SMALL);
    const foot = lines(g, caution, scene.width);
    const top = EDGE + TITLE * 1.4 + statement.length * SMALL * 1.8 + 2;
    const height = top + scene.height + 2 + foot.length * SMALL * 1.4 + EDGE;
    canvas.width = Math.ceil((scene.width + 2 * EDGE) * k);
    canvas.height = Math.ceil(height * k);
    g.setTransform(k, 0, 0, k, 0, 0);
    g.fillStyle = styles.paper;
    g.fillRect(0, 0, canvas.width, canvas.height);
    g.fillStyle = styles.ink;
    font(TITLE, 600);
    g.fillText(titleOf(plan, answer), EDGE, EDGE + TITLE, scene.width);
    font(SMALL * 1.25);
    statement.forEach((line, i) => g.fillText(line, EDGE, EDGE + TITLE * 1.4 + (i + 1) * SMALL * 1.7));
    g.save();
    g.translate(EDGE, top);
    paint(g, scene, styles, family, { hairMM: 1 / k });
    g.restore();
    g.textAlign = "left";
    g.fillStyle = styles.quiet;
    font(SMALL);
    foot.forEach((line, i) => g.fillText(line, EDGE, top + scene.height + 2 + (i + 1) * SMALL * 1.4));
    return new Promise((resolve, reject) => canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error("no picture"))), "image/png"));
  }

  async function copy() {
    const made = picture();
    if (!made) {
      notices.tell("picture", store.get().present ? "No picture while something is covered: leave the presentation first." : "There is no picture yet: nothing has been computed.");
      return;
    }
    try {
      // The promise is handed over at once: some browsers copy only within the press.
      await navigator.clipboard.write([new ClipboardItem({ "image/png": made })]);
      notices.tell("picture", "The sheet is copied as a picture, with its title and the caution.");
    } catch {
      const name = fileName(store.get().plan, store.get().answer?.title ?? "").replace(/\.json$/, ".png");
      download(await made, name);
      notices.tell("picture", `This browser does not let the page copy pictures: saved as ${name}.`);
    }
  }

  async function fullScreen() {
    try {
      if (document.fullscreenElement) await document.exitFullscreen();
      else await document.documentElement.requestFullscreen();
    } catch {
      notices.tell("screen", "This browser does not let the page take the whole screen.");
    }
  }

  return { copy, fullScreen };
}
