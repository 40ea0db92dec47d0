// The sheet itself: the painted scene, the hair line, and the hand on both.

import { el, say } from "../base/dom.js";
import { nextFrame } from "../base/frame.js";
import { seconds } from "../base/format.js";
import { PX_PER_MM } from "../base/scale.js";
import { nearest, placeOf, timeAt } from "../engine/scene.js";
import { covered } from "../model/cover.js";
import { ladderFor, pan, zoomTo } from "../model/view.js";
import { grip } from "./grip.js";
import { handView } from "./hand.js";
import { timelineKeys } from "./keys.js";
import { cover, halo, outline, paint } from "./paint.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 */

const REACH_PX = 9; // how near a press must be to a mark
const HANDLE_PX = 7; // and to a handle
const SNAP_PX = 7; // how near the hair line must be to an event to jump to it

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {import("./hand.js").Ask} ask
 * @param {Catalogue} catalogue
 * @param {HTMLElement[]} over what other views lay over the paper
 */
export function timelineView(root, store, ask, catalogue, over) {
  const canvas = el("canvas", { role: "img" });
  const hairTime = el("span", { class: "hair-time" });
  const hair = el("div", { class: "hair", hidden: true, "aria-hidden": "true" }, hairTime);
  const pin = el("div", { class: "pin", hidden: true, "aria-hidden": "true" });
  const paper = el("div", { class: "paper" }, canvas, pin, hair, over);
  const pane = el("div", {
    id: "timeline", class: "timeline", tabIndex: 0, role: "application", "aria-roledescription": "timeline",
    "aria-label": "Timeline. Arrow keys pan, comma and full stop walk the events, Alt with an arrow moves the selected one, B tries a beat, G tells why no stimulus came, question mark lists all keys.",
    onkeydown: (/** @type {KeyboardEvent} */ e) => hand.keys(e) || timelineKeys(e, store),
    onscroll: () => hideHair(),
  }, paper);
  root.append(pane);

  const g = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
  let width = 0;
  const family = getComputedStyle(pane).fontFamily;

  function draw() {
    const { scene: whole, dark, lit, selected, present } = store.get();
    if (!whole || width === 0) return;
    const scene = present ? covered(whole, present.until_ms) : whole;
    const dpr = window.devicePixelRatio || 1;
    const styles = dark ? catalogue.styles.dark : catalogue.styles.light;
    const w = Math.round(scene.width * PX_PER_MM);
    const h = Math.round(scene.height * PX_PER_MM);
    if (canvas.width !== Math.round(w * dpr) || canvas.height !== Math.round(h * dpr)) {
      canvas.width = Math.round(w * dpr);
      canvas.height = Math.round(h * dpr);
      canvas.style.width = `${w}px`;
      canvas.style.height = `${h}px`;
      paper.style.height = `${h}px`;
    }
    const k = PX_PER_MM * dpr;
    g.setTransform(k, 0, 0, k, 0, 0);
    g.fillStyle = styles.paper;
    g.fillRect(0, 0, scene.width, scene.height);
    halo(g, scene, styles, new Set(lit));
    paint(g, scene, styles, family, { hairMM: 1 / k });
    outline(g, scene, styles, new Set([...lit, selected]));
    if (present) cover(g, scene, styles, family, { hairMM: 1 / k, from: placeOf(scene, present.until_ms) });
    canvas.dataset.marks = String(scene.marks.length);
    stick();
  }

  /** Puts the pin at the selected event, through every lane. */
  function stick() {
    const { scene, selected } = store.get();
    const at = scene?.times.find((s) => s[0] === selected);
    pin.hidden = selected === 0 || !at || !scene;
    if (at && scene) pin.style.transform = `translateX(${placeOf(scene, at[1]) * PX_PER_MM}px)`;
  }

  function hideHair() {
    hair.hidden = true;
    hand.leave();
  }

  /** @param {MouseEvent} e */
  function place(e) {
    const box = canvas.getBoundingClientRect();
    return { x: (e.clientX - box.left) / PX_PER_MM, y: (e.clientY - box.top) / PX_PER_MM };
  }

  /** @param {PointerEvent} e */
  function moveHair(e) {
    const { scene, answer, present } = store.get();
    if (!scene || !answer || present) return;
    const { x, y } = place(e);
    let t = timeAt(scene, x);
    let snapped = false;
    const hit = nearest(scene, x, y, REACH_PX / PX_PER_MM);
    const own = hit ? scene.times.find((s) => s[0] === hit.event) : undefined;
    if (own && Math.abs(placeOf(scene, own[1]) - x) * PX_PER_MM <= 3 * SNAP_PX) {
      t = own[1];
      snapped = true;
    } else {
      let least = (SNAP_PX / PX_PER_MM / scene.axis.mm_per_s) * 1000;
      for (const [, at] of scene.times) {
        const d = Math.abs(at - timeAt(scene, x));
        if (d <= least) {
          least = d;
          t = at;
          snapped = true;
        }
      }
    }
    hair.hidden = x < scene.axis.x0 || t < 0 || t > answer.span_ms;
    if (hair.hidden) return;
    const px = placeOf(scene, t) * PX_PER_MM;
    hair.style.transform = `translateX(${px}px)`;
    hair.classList.toggle("snapped", snapped);
    hairTime.classList.toggle("left", px > width - 80);
    say(hairTime, seconds(t));
    pane.classList.toggle("over-mark", hit !== null);
    pane.classList.toggle("over-handle", hand.hover(e) !== null);
  }

  /** @param {PointerEvent} e @param {import("../model/handle.js").Handle | null} held what could be moved there */
  function pick(e, held) {
    const { scene, present } = store.get();
    if (!scene || present) return;
    const { x, y } = place(e);
    const hit = nearest(scene, x, y, REACH_PX / PX_PER_MM);
    hand.press(e, hit);
    // Ends of windows crowd: a press there is meant for what the pointer has named.
    const named = held && (!hit || hit.cls.startsWith("window")) ? held.event : hit?.event ?? 0;
    store.set({ selected: named, drawer: named && narrow() ? "account" : store.get().drawer });
  }

  const hand = handView(paper, store, ask, place, HANDLE_PX);
  const pointers = grip(canvas, store, { moveHair, hideHair, pick, place, take: hand.take, drag: hand.drag, drop: hand.drop }, HANDLE_PX);

  pane.addEventListener("wheel", (e) => {
    const { scene, answer, view } = store.get();
    if (!scene || !answer) return;
    if (e.ctrlKey || e.metaKey) {
      e.preventDefault();
      const t = timeAt(scene, place(e).x);
      store.set({ view: zoomTo(view, view.mm_per_s * Math.exp(-e.deltaY * 0.0025), t, answer.span_ms) });
      return;
    }
    const tall = pane.scrollHeight > pane.clientHeight + 1;
    const across = e.shiftKey && e.deltaX === 0 ? e.deltaY : e.deltaX;
    const px = tall || across !== 0 ? across : e.deltaY;
    if (px === 0) return;
    e.preventDefault();
    store.set({ view: pan(view, (px / PX_PER_MM / view.mm_per_s) * 1000, answer.span_ms) });
  }, { passive: false });

  /** Tells the view how much room there is. */
  function fit() {
    if (pane.clientWidth === 0) return;
    width = pane.clientWidth;
    const { view, before } = store.get();
    const ladder = ladderFor(view, before ? pane.clientHeight / 2 : pane.clientHeight);
    const width_mm = Math.max(20, width / PX_PER_MM - catalogue.margins_mm[ladder]);
    const height_mm = Math.floor(pane.clientHeight / PX_PER_MM);
    if (view.width_mm === width_mm && view.height_mm === height_mm && view.ladder === ladder) return;
    store.set({ view: { ...view, width_mm, height_mm, ladder } });
    nextFrame(draw);
  }
  const watch = new ResizeObserver(fit);
  watch.observe(pane);

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (["scene", "dark", "lit", "present"].some((k) => changed.has(k))) draw();
      else if (changed.has("selected")) draw();
      if (changed.has("view") || changed.has("before")) {
        hideHair();
        fit();
      }
      if ((changed.has("answer") || changed.has("present")) && state.answer) {
        const rest = state.present ? `Covered from ${seconds(state.present.until_ms)} on.` : state.answer.statement.map((c) => c.text).join("");
        canvas.setAttribute("aria-label", `Leads and ladder diagram. ${rest}`);
        document.body.dataset.fingerprint = state.answer.fingerprint;
      }
      hand.update(state, changed);
      if (changed.has("tab")) pane.hidden = state.tab !== "timeline";
    },
    destroy() {
      watch.disconnect();
      hand.destroy();
      pointers.destroy();
      pane.remove();
    },
  };
}

/** Whether Settings and Account are drawers. */
function narrow() {
  return matchMedia("(max-width: 68.75em)").matches;
}
