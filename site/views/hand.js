// The hand on the timeline: it moves what has a handle, by pointer and by key, and
// drops extra beats into the tiers of the atria and the ventricles.

import { PX_PER_MM } from "../base/scale.js";
import { handleAt, nearest, timeAt } from "../engine/scene.js";
import { handleOf, later, stepFor, timeOf, told, valueAt } from "../model/handle.js";
import { get, put } from "../model/path.js";
import { shown } from "../model/view.js";
import { bandView } from "./band.js";
import { moves } from "./move.js";
import { overlay } from "./overlay.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../model/handle.js").Handle} Handle
 * @typedef {import("../engine/scene.js").Scene} Scene
 * @typedef {(op: import("../engine/client.js").Op, args: any) => Promise<any>} Ask
 * @typedef {{chamber: "A" | "V", ms: number, tier: import("./overlay.js").Tier, y: number}} Spot
 */

/** Where an extra beat of a chamber is put. */
const SITES = { A: "right_atrium", V: "rv_apex" };
/** Tiers in which one can be dropped, by their names in either form of the ladder. @type {Record<string, "A" | "V">} */
const TIERS = { a: "A", atria: "A", v: "V", ventricles: "V" };

/**
 * @param {HTMLElement} paper
 * @param {Store} store
 * @param {Ask} ask
 * @param {(e: MouseEvent) => {x: number, y: number}} place in millimetres
 * @param {number} reach px
 */
export function handView(paper, store, ask, place, reach) {
  const over = overlay(paper, drop);
  const band = bandView(over.layer, putAt);
  const move = moves(store, ask, showFlips);
  let keyed = 0; // timer that ends a move by keys
  let pointer = /** @type {Spot | null} */ (null); // where a beat could be tried
  let hairAt = /** @type {number | null} */ (null);
  let off = 0; // milliseconds from the handle to the pointer that holds it
  let wanted = -1; // the intervention to select when it has been computed

  function showFlips() {
    const { scene } = store.get();
    const h = move.moved();
    if (!scene) return;
    const now = move.now();
    over.flips(scene, h && now ? { ...h, y0: now.y0, y1: now.y1 } : h, move.flips());
  }

  /** @param {MouseEvent} e @returns {Spot | null} an empty place in a tier */
  function spot(e) {
    const { scene, answer } = store.get();
    if (!scene || !answer) return null;
    const { x, y } = place(e);
    const ms = Math.round(timeAt(scene, x));
    const tier = scene.tiers.find((t) => TIERS[t.name] && y >= t.y0 && y <= t.y1);
    if (!tier || x < scene.axis.x0 || ms < 0 || ms > answer.span_ms) return null;
    return nearest(scene, x, y, reach / PX_PER_MM) ? null : { chamber: TIERS[tier.name], ms, tier, y };
  }

  /** Puts an extra beat into the plan and selects it. @param {"A" | "V"} chamber @param {number} ms */
  function drop(chamber, ms) {
    const { plan } = store.get();
    const list = Array.isArray(get(plan, "interventions")) ? get(plan, "interventions") : [];
    store.settle();
    wanted = list.length;
    store.edit(put(plan, `interventions[${list.length}]`, { at_ms: Math.round(ms), do: "stimulate", site: SITES[chamber] }), "");
    store.settle();
  }

  /** Puts the scanned beat at a coupling. @param {number} coupling */
  function putAt(coupling) {
    const { scan, plan } = store.get();
    if (!scan) return;
    store.settle();
    wanted = scan.item;
    store.edit(put(plan, `interventions[${scan.item}].at_ms`, Number((scan.from_ms + coupling).toFixed(3))), "");
    store.settle();
  }

  /** Asks why no stimulus came around an instant. @param {number} ms @param {boolean} any else only a gap longer than the lower-rate interval */
  async function whyGap(ms, any) {
    const reply = await ask("gap", { t_ms: ms });
    const gap = reply?.json;
    if (gap && (any || gap.long)) store.set({ gap, selected: 0, lit: gap.lines.map((/** @type {any} */ l) => l.id) });
    return Boolean(gap);
  }

  /** Selects the stimulus of a new intervention once it stands on the sheet. */
  function selectWanted() {
    const { scene, computed, plan } = store.get();
    if (wanted < 0 || !scene || computed !== plan) return;
    const own = scene.handles.find((h) => h.path === `interventions[${wanted}].at_ms`);
    if (!own) return;
    wanted = -1;
    store.set({ selected: own.event });
  }

  /** Where a key puts a beat: at the hair, or half way from the selected event to the next beat. @param {"A" | "V"} chamber */
  function byKey(chamber) {
    const { answer, account, selected, view } = store.get();
    if (!answer) return;
    let ms = hairAt ?? view.t0_ms + shown(view) / 2;
    if (hairAt === null && selected && account) {
      const beats = chamber === "A" ? answer.overview.atrium : answer.overview.ventricle;
      const next = beats.find((b) => b > account.t_ms + 50) ?? account.t_ms + 600;
      ms = (account.t_ms + next) / 2;
    }
    drop(chamber, ms);
  }

  /** The handle that keys move: of the selected event. */
  function selectedHandle() {
    const { scene, selected } = store.get();
    if (!scene || !selected) return null;
    const at = scene.times.find((t) => t[0] === selected);
    return handleOf(scene.handles, selected, at ? at[1] : NaN);
  }

  /** Moves the selected handle by steps. @param {number} steps */
  function nudge(steps) {
    const { scene } = store.get();
    const h = selectedHandle();
    if (!scene) return;
    if (!h) {
      over.tell(0.4 * paper.clientWidth, 24, "Nothing moves this event: select a stimulus, the end of a window, a discharge or a P", true);
      return;
    }
    if (move.moved()?.path !== h.path || keyed === 0) move.begin(h, false);
    const from = /** @type {Handle} */ (move.moved());
    const value = later({ ...from, value: move.value() }, steps);
    move.to(value);
    show(from, value);
    clearTimeout(keyed);
    keyed = window.setTimeout(() => {
      keyed = 0;
      move.settle();
      over.quiet();
    }, 1500);
  }

  /** @param {Handle} h @param {number} value */
  function show(h, value) {
    const { scene, diagnoses } = store.get();
    if (!scene) return;
    const now = move.now();
    const at = h.fixed && now ? now.t_ms : timeOf(h, value);
    const refused = diagnoses[0];
    const limit = value >= h.max ? "most" : value <= h.min ? "least" : "";
    const words = `${told({ ...h, coupling_ms: now?.coupling_ms ?? -1 }, value)}${limit ? `, the ${limit} that is allowed` : ""}`;
    over.grip(scene, { ...h, ...(now ? { y0: now.y0, y1: now.y1 } : {}), t_ms: at }, refused ? `${words}: ${refused.note || refused.text}` : words);
  }

  return {
    /** @param {Handle} h @param {{x: number, y: number}} at where it was taken hold of, mm */
    take(h, at) {
      const { scene } = store.get();
      off = scene ? timeAt(scene, at.x) - h.t_ms : 0;
      over.offer(/** @type {any} */ (store.get().scene), null);
      over.hideGhost();
      move.begin(h, true);
    },

    /** @param {MouseEvent} e */
    drag(e) {
      const { scene, answer } = store.get();
      const h = move.held();
      if (!h || !scene || !answer) return;
      const ms = Math.min(Math.max(timeAt(scene, place(e).x) - off, 0), answer.span_ms);
      const { value } = valueAt(h, ms, stepFor(h, (scene.axis.mm_per_s * PX_PER_MM) / 1000));
      move.to(value);
      show(h, value);
    },

    /** @param {boolean} back */
    drop(back) {
      if (back) move.cancel();
      else move.settle();
      over.quiet();
    },

    busy: () => move.held() !== null,

    /** What can be done under the pointer. @param {PointerEvent} e @returns {Handle | null} */
    hover(e) {
      const { scene } = store.get();
      if (!scene) return null;
      const { x, y } = place(e);
      const h = handleAt(scene, x, y, reach / PX_PER_MM);
      hairAt = timeAt(scene, x);
      pointer = h ? null : spot(e);
      over.grip(scene, h, h ? told(h, h.value) : "");
      over.ghost(scene, over.offered() ? null : pointer);
      return h;
    },

    leave() {
      pointer = null;
      hairAt = null;
      over.hideGhost();
      if (!move.held() && keyed === 0) over.quiet();
    },

    /**
     * A press that moved nothing: an empty place in a tier offers a beat, and tells why no
     * stimulus came if the gap is long; the measure of an RR interval tells it always.
     * @param {PointerEvent} e
     * @param {import("../engine/scene.js").Mark | null} hit
     */
    press(e, hit) {
      const { scene, answer, gap } = store.get();
      if (!scene || !answer) return;
      const at = spot(e);
      over.offer(scene, at);
      if (gap) store.set({ gap: null, lit: [] });
      if (!answer.device) return;
      const { x } = place(e);
      if (hit?.cls.startsWith("dim") && isCycle(scene, hit)) whyGap(timeAt(scene, x), true);
      else if (at?.chamber === "V") whyGap(at.ms, false);
    },

    /** @param {KeyboardEvent} e @returns {boolean} whether the key was for the hand */
    keys(e) {
      if (e.ctrlKey || e.metaKey) return false;
      if (e.altKey && (e.key === "ArrowLeft" || e.key === "ArrowRight")) {
        e.preventDefault();
        nudge((e.key === "ArrowRight" ? 1 : -1) * (e.shiftKey ? 10 : 1));
        return true;
      }
      if (!e.altKey && e.key.toLowerCase() === "g") {
        const { account, selected, view } = store.get();
        e.preventDefault();
        whyGap(hairAt ?? (selected && account ? account.t_ms : view.t0_ms + shown(view) / 2), true);
        return true;
      }
      if (!e.altKey && e.key.toLowerCase() === "b") {
        e.preventDefault();
        byKey(e.shiftKey ? "V" : "A");
        return true;
      }
      return false;
    },

    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      move.update(state, changed);
      if (changed.has("view") || changed.has("plan")) over.offer(/** @type {any} */ (state.scene), null);
      if (changed.has("plan") && state.gap) store.set({ gap: null, lit: [] });
      if (state.scene && ["scene", "extra", "scan", "selected"].some((k) => changed.has(k))) band.update(state.scene, store.get(), changed.has("scene"));
      if (changed.has("scene")) {
        selectWanted();
        showFlips();
        const h = move.moved();
        if (h && (move.held() || keyed)) show(h, move.value());
      }
    },

    destroy() {
      clearTimeout(keyed);
      over.destroy();
    },
  };
}

/** Whether the mark belongs to the lowest row of measures: from QRS to QRS. @param {Scene} scene @param {import("../engine/scene.js").Mark} mark */
function isCycle(scene, mark) {
  const foot = Math.max(...scene.tiers.map((t) => t.y1));
  const rows = scene.marks.filter((m) => m.cls === "dim" && m.event > 0 && m.y === m.y2 && m.y > foot).map((m) => m.y);
  return mark.event > 0 && Math.abs(mark.y - Math.max(...rows)) < 2 && mark.y > foot;
}
