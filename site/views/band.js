// The scan of an extra beat as a band under the tier of its chamber, and what came of
// the beat in words beside it.

import { el, fill } from "../base/dom.js";
import { clamp, PX_PER_MM } from "../base/scale.js";
import { placeOf } from "../engine/scene.js";
import { kindOf, letter, told } from "./trial.js";

/** @typedef {import("../engine/scene.js").Scene} Scene */

const TALL_PX = 24;

/**
 * @param {HTMLElement} layer
 * @param {(coupling: number) => void} pick
 */
export function bandView(layer, pick) {
  const band = el("div", { class: "scan-band", role: "group", "aria-label": "Outcomes by coupling: press one to put the beat there" });
  const outcome = el("div", { class: "outcome", hidden: true });
  layer.append(band, outcome);
  let drawn = /** @type {any} */ (null);

  /** @param {Scene} scene @param {import("../model/store.js").State} state */
  function draw(scene, { scan }) {
    drawn = scan;
    fill(band);
    if (!scan || scan.segments.length === 0) return;
    const atria = /atri|sinus/.test(scan.site);
    const tier = scene.tiers.find((t) => (atria ? ["a", "atria"] : ["v", "ventricles"]).includes(t.name));
    if (!tier) return;
    const x = (/** @type {number} */ c) => placeOf(scene, scan.from_ms + c) * PX_PER_MM;
    const left = scene.axis.x0 * PX_PER_MM;
    band.style.transform = `translate(0px, ${tier.y1 * PX_PER_MM + 3}px)`;
    scan.segments.forEach((s, i) => {
      const next = scan.segments[i + 1];
      const x0 = Math.max(x(s.from - (i > 0 ? 0.5 : 0)), left);
      const x1 = x(next ? (scan.finished ? next.from - 0.5 : s.to) : s.to);
      if (x1 <= left) return;
      const node = el("button", {
        type: "button", class: "piece", "data-kind": kindOf(s.slug), "data-slug": s.slug, title: `${letter(i)}: ${s.from}–${s.to} ms, ${told(s)}`,
        "aria-label": `${letter(i)}, ${s.from} to ${s.to} ms: ${told(s)}`,
        onclick: (/** @type {MouseEvent} */ e) => {
          const at = e.detail > 0 ? Math.round(s.from + ((e.clientX - node.getBoundingClientRect().left) / node.offsetWidth) * (s.to - s.from)) : Math.round((s.from + s.to) / 2);
          pick(clamp(at, s.from, s.to));
        },
      }, letter(i), i > 0 && x1 - x0 > 26 && el("small", { "data-at": String(s.from) }));
      node.style.left = `${x0}px`;
      node.style.width = `${Math.max(x1 - x0, 2)}px`;
      node.style.height = `${TALL_PX}px`;
      band.append(node);
    });
  }

  return {
    /** @param {Scene} scene @param {import("../model/store.js").State} state @param {boolean} moved the scene is another one */
    update(scene, state, moved) {
      if (moved || state.scan !== drawn) draw(scene, state);
      const own = state.extra && scene.handles.find((h) => h.event === state.selected && h.path.startsWith("interventions"));
      outcome.hidden = !own;
      if (!own || !state.extra) return;
      outcome.textContent = state.extra.text;
      const x = placeOf(scene, own.t_ms) * PX_PER_MM;
      const atria = own.y0 < (scene.tiers[0]?.y1 ?? 0);
      outcome.dataset.slug = state.extra.slug;
      outcome.classList.remove("left");
      outcome.style.transform = `translate(${x}px, ${atria ? own.y0 * PX_PER_MM - 24 : own.y1 * PX_PER_MM + 4}px)`;
      outcome.classList.toggle("left", x + outcome.offsetWidth + 12 > layer.clientWidth);
    },
  };
}
