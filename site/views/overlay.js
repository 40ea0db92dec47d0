// What the hand leaves on the sheet, over the drawing: the sign of a handle, the value
// at the pointer, where an outcome flipped, the ghost of a beat that could be tried.

import { el, fill, say } from "../base/dom.js";
import { num, seconds } from "../base/format.js";
import { PX_PER_MM } from "../base/scale.js";
import { placeOf } from "../engine/scene.js";
import { timeOf } from "../model/handle.js";

/**
 * @typedef {import("../model/handle.js").Handle} Handle
 * @typedef {import("../model/flips.js").Flip} Flip
 * @typedef {import("../engine/scene.js").Scene} Scene
 * @typedef {{name: string, y0: number, y1: number}} Tier
 */

/** @typedef {ReturnType<typeof overlay>} Overlay */

/** How far below a handle the words of its flips begin, and how far apart they are. */
const UNDER_PX = 22;
const LINE_PX = 18;

/**
 * @param {HTMLElement} paper
 * @param {(chamber: "A" | "V", ms: number) => void} drop puts an extra beat
 */
export function overlay(paper, drop) {
  const sign = el("div", { class: "grip-sign", hidden: true });
  const tip = el("div", { class: "tip", hidden: true, role: "status" });
  const flips = el("div", { class: "flips" });
  const ghost = el("div", { class: "ghost", hidden: true });
  const plus = el("button", { type: "button", class: "plus", hidden: true, onclick: () => put() });
  const layer = el("div", { class: "overlay" }, sign, flips, ghost, tip, plus);
  paper.append(layer);
  let offer = /** @type {{chamber: "A" | "V", ms: number} | null} */ (null);

  function put() {
    const o = offer;
    clearOffer();
    if (o) drop(o.chamber, o.ms);
  }

  function clearOffer() {
    offer = null;
    plus.hidden = true;
  }

  /** @param {HTMLElement} node @param {number} x px @param {number} y px */
  function place(node, x, y) {
    node.hidden = false;
    node.classList.remove("left");
    node.style.transform = `translate(${x}px, ${y}px)`;
    side(node, node, x);
  }

  /** Puts a text that would run over the right edge to the left of its place. @param {HTMLElement} node @param {HTMLElement} text @param {number} x */
  function side(node, text, x) {
    node.classList.toggle("left", x + text.offsetWidth + 12 > paper.clientWidth && x > paper.clientWidth / 2);
  }

  return {
    /** Shows that something can be moved, and its value. @param {Scene} scene @param {Handle | null} h @param {string} [text] */
    grip(scene, h, text = "") {
      sign.hidden = h === null;
      tip.hidden = h === null || text === "";
      if (!h) return;
      const x = placeOf(scene, h.t_ms) * PX_PER_MM;
      const top = h.y0 * PX_PER_MM - 3;
      sign.style.height = `${Math.max(12, (h.y1 - h.y0) * PX_PER_MM + 6)}px`;
      place(sign, x, top);
      if (text === "") return;
      tip.classList.remove("wrong");
      say(tip, text);
      place(tip, x, top - 22);
    },

    /** Says a value beside the pointer. @param {number} x px @param {number} y px @param {string} text @param {boolean} wrong */
    tell(x, y, text, wrong) {
      tip.classList.toggle("wrong", wrong);
      say(tip, text);
      place(tip, x, y);
    },

    quiet() {
      sign.hidden = tip.hidden = true;
    },

    /** Marks where the outcome flips. @param {Scene} scene @param {Handle | null} h @param {Flip[]} list */
    flips(scene, h, list) {
      fill(flips);
      if (!h) return;
      const top = h.y0 * PX_PER_MM;
      const tall = (h.y1 - h.y0) * PX_PER_MM;
      list.forEach((f, i) => {
        const x = placeOf(scene, timeOf(h, (f.low + f.high) / 2)) * PX_PER_MM;
        const from = `from ${num(f.high, 1)} ${h.unit}: ${f.above}`;
        const to = `to ${num(f.low, 1)} ${h.unit}: ${f.below}`;
        const words = f.above && !f.above.startsWith("without") ? from : f.below ? to : from;
        const text = el("span", null, words);
        const line = el("i", null);
        const node = el("div", { class: `flip${f.exact ? "" : " rough"}`, "data-low": String(f.low), "data-high": String(f.high) }, line, text);
        line.style.height = `${tall + 6 + UNDER_PX + LINE_PX * i}px`;
        text.style.top = `${tall + UNDER_PX - 8 + LINE_PX * i}px`;
        node.style.transform = `translate(${x}px, ${top - 3}px)`;
        flips.append(node);
        side(node, text, x);
      });
    },

    /** The ghost of a beat under the pointer. @param {Scene} scene @param {{chamber: "A" | "V", ms: number, tier: Tier, y: number} | null} at */
    ghost(scene, at) {
      ghost.hidden = at === null;
      if (!at) return;
      const x = placeOf(scene, at.ms) * PX_PER_MM;
      place(ghost, x, (at.chamber === "A" ? at.tier.y0 : at.tier.y1) * PX_PER_MM);
      tip.classList.remove("wrong");
      say(tip, `${num(at.ms, 0)} ms: press twice to try a beat here`);
      place(tip, x, (at.chamber === "A" ? at.tier.y0 : at.tier.y1) * PX_PER_MM - 30);
    },

    /** Offers an extra beat at an instant, as a button. @param {Scene} scene @param {{chamber: "A" | "V", ms: number, tier: Tier, y: number} | null} at */
    offer(scene, at) {
      if (!at) return clearOffer();
      offer = { chamber: at.chamber, ms: at.ms };
      ghost.hidden = tip.hidden = true;
      say(plus, "+");
      const words = `Try ${at.chamber === "A" ? "an atrial" : "a ventricular"} beat at ${seconds(at.ms)}`;
      plus.title = words;
      plus.setAttribute("aria-label", words);
      place(plus, placeOf(scene, at.ms) * PX_PER_MM, at.y * PX_PER_MM); // under the pointer, so that a second press takes it
    },

    layer,
    offered: () => offer,
    hideGhost() {
      ghost.hidden = true;
    },

    destroy() {
      layer.remove();
    },
  };
}
