// What the engine is asked when the state changes, and where its answers go: the
// timeline is computed anew for a plan, laid out anew for a view, explained for a
// selection. Holds no DOM.

import { onStrip, reveal } from "../model/view.js";
import { Fault } from "./client.js";
import { readScene } from "./scene.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("./client.js").Engine} Engine
 */

/** @typedef {ReturnType<typeof conduct>} Conductor */

/** What the drawing of a state is asked with. @param {State} s */
export const drawing = (s) => ({ view: s.view, selected: s.selected });

/** Keys of the state that change how a computed timeline is drawn. */
const DRAWN = ["view", "selected"];

/**
 * @param {Store} store
 * @param {Engine} engine
 */
export function conduct(store, engine) {
  /**
   * Asks the engine; a failure is told on the page and the values stay.
   * @param {import("./client.js").Op} op
   * @param {any} args
   */
  async function ask(op, args) {
    try {
      return await engine.ask(op, args);
    } catch (err) {
      if (!(err instanceof Fault)) throw err;
      store.set({ fault: err.message });
      return null;
    }
  }

  /** What the engine was last given to compare with. @type {State["before"]} */
  let drawnWith = null;

  async function compute() {
    const asked = store.get();
    const reply = await ask("compute", { plan: asked.plan, before: asked.before?.plan ?? null, ...drawing(asked) });
    if (!reply) return;
    const { ok, diagnoses, answer, scene } = reply.json;
    if (!ok) {
      store.set({ diagnoses, fault: "" });
      if (asked.before !== drawnWith) layout();
      drawnWith = asked.before;
      return;
    }
    drawnWith = asked.before;
    const { view, selected } = store.get();
    store.set({
      answer, computed: asked.plan, diagnoses: [], fault: "",
      scene: readScene(scene, reply.points),
      view: onStrip(view, answer.span_ms),
      selected: selected <= answer.events && (selected >= 0 || asked.before) ? selected : 0,
    });
    differ();
    if (selected) explain();
    if (view !== asked.view || selected !== asked.selected) layout(); // it was drawn for what was asked
  }

  async function layout() {
    const s = store.get();
    if (!s.answer) return;
    const reply = await ask("layout", drawing(s));
    if (reply?.json) store.set({ scene: readScene(reply.json, reply.points) });
    else if (reply) compute(); // a restarted engine has no timeline yet
  }

  /** How the timeline differs from the one before, or nothing. */
  async function differ() {
    const { before } = store.get();
    if (!before) {
      store.set({ contrast: null });
      return;
    }
    const reply = await ask("contrast", {});
    if (reply && store.get().before === before) store.set({ contrast: reply.json });
  }

  async function explain() {
    const { selected, answer } = store.get();
    if (!selected || !answer) return;
    const reply = await ask("account", { event: selected });
    if (!reply?.json || store.get().selected !== selected) return;
    const account = reply.json;
    store.set({ account, view: reveal(store.get().view, account.t_ms, answer.span_ms) });
  }

  return {
    ask,
    compute,

    /** Asks for all that a change of the state calls for. @param {Set<string>} changed */
    request(changed) {
      if (changed.has("plan") || changed.has("before")) compute();
      else if (DRAWN.some((k) => changed.has(k))) layout();
      if (changed.has("selected")) explain();
    },
  };
}
