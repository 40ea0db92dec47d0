// Every key of the page: what it does, and the list that shows it.

import { el, typing } from "../base/dom.js";
import { dialog } from "./dialog.js";
import { fitSpeed, pan, shown, zoomTo } from "../model/view.js";

/** @typedef {import("../model/store.js").Store} Store */

/** What the list shows; the handlers below are its other half. */
export const KEYS = [
  ["On the timeline", [
    ["← →", "move along the strip; with Shift by a screen"],
    ["Home End", "start and end of the strip"],
    [", .", "previous and next event"],
    ["C", "from the selected event to its cause"],
    ["Alt ← →", "move the selected stimulus, window, P or discharge by a step; with Shift by ten"],
    ["G", "why no stimulus came here: at the pointer, or at the selected event"],
    ["B, Shift B", "try an atrial or a ventricular beat: at the pointer, or after the selected event"],
    ["Esc", "select nothing"],
    ["+ −", "stretch and squeeze time"],
    ["1 2 0", "25 mm/s, 50 mm/s, whole strip"],
    ["F", "plain or full ladder"],
    ["N", "next finding; with Shift the previous one"],
    ["K", "keep the strip as before, to compare; again lets it go"],
    ["M", "calipers on and off"],
  ]],
  ["On a leg of the calipers", [
    ["← →", "to the next event; with Shift by 1 ms, with Alt by 10 ms"],
    ["Enter", "march the interval along the strip"],
    ["Esc", "calipers off"],
  ]],
  ["On the map", [
    ["← → ↑ ↓", "from point to point; with Shift by ten"],
    ["Home End", "first and last value across; Page Up, Page Down upwards"],
    ["Enter", "open the strip of the point"],
    ["A", "keep the point to compare, or let go of it"],
    ["D", "compare the strips of the kept point and this one"],
    ["R, Esc", "run the map, cancel it"],
  ]],
  ["While presenting", [
    ["Space →", "reveal the next beat; Shift → one wave"],
    ["←", "cover the last beat again; Shift ← one wave"],
    ["Home End", "cover all but the first beat; reveal all"],
    ["Esc", "leave"],
  ]],
  ["In a setting", [
    ["↑ ↓", "one step up or down; with Shift ten"],
    ["Enter", "take the value and stay"],
    ["Esc", "back to the value before"],
    ["Delete all", "an emptied field takes its default again"],
  ]],
  ["Anywhere", [
    ["/", "search the settings"],
    ["P", "choose a preset"],
    ["Ctrl O", "open a plan file; or drop one on the page"],
    ["S", "save the plan as a file"],
    ["Ctrl S", "keep the plan in this browser"],
    ["Shift K", "kept plans"],
    ["L", "copy a link with the plan in it"],
    ["Ctrl P", "print or export; in that dialog: save"],
    ["I", "copy the sheet as a picture"],
    ["T", "present: cover what comes next"],
    ["Z", "full screen"],
    ["Ctrl Z", "undo; with Shift, or Ctrl Y, redo"],
    ["?", "this list"],
  ]],
];

/**
 * @param {KeyboardEvent} e
 * @param {Store} store
 */
export function timelineKeys(e, store) {
  if (e.ctrlKey || e.metaKey || e.altKey) return;
  const { view, answer, selected, account } = store.get();
  if (!answer) return;
  const span = answer.span_ms;
  const width = shown(view);
  const centre = account && selected ? account.t_ms : view.t0_ms + width / 2;
  /** @type {Record<string, () => void>} */
  const acts = {
    ArrowLeft: () => store.set({ view: pan(view, e.shiftKey ? -0.9 * width : -0.1 * width, span) }),
    ArrowRight: () => store.set({ view: pan(view, e.shiftKey ? 0.9 * width : 0.1 * width, span) }),
    Home: () => store.set({ view: pan({ ...view, t0_ms: 0 }, 0, span) }),
    End: () => store.set({ view: pan({ ...view, t0_ms: span }, 0, span) }),
    ",": () => step(store, -1),
    ".": () => step(store, 1),
    c: () => account && account.chain.length > 1 && store.set({ selected: account.chain[1].id }),
    Escape: () => store.set({ selected: 0 }),
    "+": () => store.set({ view: zoomTo(view, view.mm_per_s * 1.25, centre, span) }),
    "=": () => store.set({ view: zoomTo(view, view.mm_per_s * 1.25, centre, span) }),
    "-": () => store.set({ view: zoomTo(view, view.mm_per_s / 1.25, centre, span) }),
    1: () => store.set({ view: zoomTo(view, 25, centre, span) }),
    2: () => store.set({ view: zoomTo(view, 50, centre, span) }),
    0: () => store.set({ view: zoomTo(view, fitSpeed(view, span), 0, span) }),
    f: () => store.change({ view: { ...view, ladder: view.ladder === "plain" ? "full" : "plain", ladder_chosen: true } }, ""),
  };
  const act = acts[e.key.length === 1 ? e.key.toLowerCase() : e.key];
  if (!act) return;
  e.preventDefault();
  act();
}

/**
 * Selects the next event that is drawn; beyond the edge of the screen simply the next.
 * @param {Store} store
 * @param {1 | -1} way
 */
function step(store, way) {
  const { scene, selected, answer } = store.get();
  if (!scene || !answer || answer.events === 0) return;
  if (selected < 0) { // an event before the change
    const upper = scene.times.map((s) => -s[0]).filter((id) => id > 0).sort((a, b) => a - b);
    const other = way > 0 ? upper.find((id) => id > -selected) : upper.findLast((id) => id < -selected);
    if (other) store.set({ selected: -other });
    return;
  }
  const drawn = scene.times.map((s) => s[0]).filter((id) => id > 0).sort((a, b) => a - b);
  if (selected === 0) {
    const first = way > 0 ? drawn[0] : drawn[drawn.length - 1];
    if (first) store.set({ selected: first });
    return;
  }
  const next = way > 0 ? drawn.find((id) => id > selected) : drawn.findLast((id) => id < selected);
  const id = next ?? selected + way;
  if (id >= 1 && id <= answer.events) store.set({ selected: id });
}

/**
 * Keys that work wherever the focus is, except while text is typed.
 * @param {Store} store
 * @param {Record<string, (e: KeyboardEvent) => void>} acts
 */
export function globalKeys(store, acts) {
  /** @param {KeyboardEvent} e */
  function listen(e) {
    if (e.defaultPrevented) return; // another has taken it
    const key = e.key.toLowerCase();
    if ((e.ctrlKey || e.metaKey) && !e.altKey && (key === "z" || key === "y")) {
      e.preventDefault();
      if (key === "y" || e.shiftKey) store.redo();
      else store.undo();
      return;
    }
    const act = acts[`ctrl ${key}`];
    if ((e.ctrlKey || e.metaKey) && !e.altKey && !e.shiftKey && act && !document.querySelector("dialog[open]")) {
      e.preventDefault();
      act(e);
      return;
    }
    if (e.ctrlKey || e.metaKey || e.altKey || typing(e.target) || document.querySelector("dialog[open]")) return;
    if (!acts[key]) return;
    e.preventDefault();
    acts[key](e);
  }
  document.addEventListener("keydown", listen);
  return () => document.removeEventListener("keydown", listen);
}

/** The list of keys, as a dialog. */
export function keysDialog() {
  return dialog("Keys", "keys", KEYS.map(([title, rows]) => el("section", null,
    el("h3", null, String(title)),
    el("dl", null, /** @type {string[][]} */ (rows).map(([key, what]) => [el("dt", null, key), el("dd", null, what)]).flat()))));
}
