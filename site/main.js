// Wires the page: one store, one engine, the views. Nothing else knows all three.

import { append, el, fill } from "./base/dom.js";
import { nextFrame } from "./base/frame.js";
import { Fault, startEngine } from "./engine/client.js";
import { readScene } from "./engine/scene.js";
import { createStore } from "./model/store.js";
import { FIRST_VIEW, onStrip, reveal } from "./model/view.js";
import { accountView } from "./views/account.js";
import { drawersView } from "./views/drawers.js";
import { headView } from "./views/head.js";
import { globalKeys, keysDialog } from "./views/keys.js";
import { listingView } from "./views/listing.js";
import { overviewView } from "./views/overview.js";
import { presetsDialog } from "./views/presets.js";
import { settingsView } from "./views/settings.js";
import { tableView } from "./views/table.js";
import { timelineView } from "./views/timeline.js";
import { toolbarView } from "./views/toolbar.js";

/** @typedef {import("./model/store.js").State} State */
/** @typedef {import("./engine/wire.js").Catalogue} Catalogue */

const SHEET = "escapement.sheet"; // where the choice of a light or dark sheet is kept

/** @param {string} id */
const part = (id) => /** @type {HTMLElement} */ (document.getElementById(id));

const store = createStore({
  plan: { format: "escapement-plan/1" },
  preset: "",
  view: FIRST_VIEW,
  answer: null,
  scene: null,
  diagnoses: [],
  fault: "",
  selected: 0,
  account: null,
  lit: [],
  drawer: "",
  tab: "timeline",
  dark: wantsDark(),
});

const engine = startEngine(new URL("engine/worker.js", import.meta.url), (busy) => {
  document.body.dataset.busy = String(busy);
});

function wantsDark() {
  const chosen = localStorage.getItem(SHEET);
  return chosen ? chosen === "dark" : matchMedia("(prefers-color-scheme: dark)").matches;
}

/** What the drawing of the present state is asked with. @param {State} s */
const drawing = (s) => ({ view: s.view, selected: s.selected });

/**
 * Asks the engine; a failure is told on the page and the values stay.
 * @param {import("./engine/client.js").Op} op
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

async function compute() {
  const asked = store.get();
  const reply = await ask("compute", { plan: asked.plan, ...drawing(asked) });
  if (!reply) return;
  const { ok, diagnoses, answer, scene } = reply.json;
  if (!ok) {
    store.set({ diagnoses, fault: "" });
    return;
  }
  const { view, selected } = store.get();
  store.set({
    answer, diagnoses: [], fault: "",
    scene: readScene(scene, reply.points),
    view: onStrip(view, answer.span_ms),
    selected: selected <= answer.events ? selected : 0,
  });
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

async function explain() {
  const { selected, answer } = store.get();
  if (!selected || !answer) return;
  const reply = await ask("account", { event: selected });
  if (!reply?.json || store.get().selected !== selected) return;
  const account = reply.json;
  store.set({ account, view: reveal(store.get().view, account.t_ms, answer.span_ms) });
}

/** @param {Catalogue} catalogue */
function build(catalogue) {
  const keys = keysDialog();
  const presets = presetsDialog(store, catalogue);
  const settings = settingsView(part("settings"), store, catalogue, tableView(store, ask));
  const open = {
    presets: presets.open,
    keys: () => keys.showModal(),
    wrong: () => {
      store.set({ drawer: "settings" });
      settings.focusWrong();
    },
  };
  const views = [
    headView(part("head"), store, catalogue.presets, open),
    settings,
    toolbarView(part("centre"), store),
    timelineView(part("centre"), store, engine, catalogue),
    listingView(part("centre"), store, engine),
    accountView(part("account"), store),
    overviewView(part("overview"), store),
    drawersView(part("settings"), part("account"), store),
  ];
  globalKeys(store, {
    "/": () => {
      store.set({ drawer: "settings" });
      settings.focusSearch();
    },
    "?": open.keys,
    p: open.presets,
  });

  /** Asks the engine at once; the answer is painted in the frame after it comes. @param {Set<string>} changed */
  function request(changed) {
    if (changed.has("plan")) compute();
    else if (changed.has("view") || changed.has("selected")) layout();
    if (changed.has("selected")) explain();
  }

  const pending = new Set(Object.keys(store.get())); // the first time everything is new
  function refresh() {
    const changed = new Set(pending);
    pending.clear();
    const state = store.get();
    if (changed.has("dark")) document.documentElement.dataset.sheet = state.dark ? "dark" : "light";
    if (changed.has("fault")) showFault(state.fault);
    for (const v of views) v.update(state, changed);
  }
  store.subscribe((state, changed) => {
    for (const k of changed) pending.add(k);
    if (changed.has("dark")) localStorage.setItem(SHEET, state.dark ? "dark" : "light");
    request(changed);
    nextFrame(refresh);
  });
  nextFrame(refresh);
  compute();
}

/** @param {string} fault */
function showFault(fault) {
  const box = part("fault");
  box.hidden = fault === "";
  if (fault === "") return;
  fill(box, el("strong", null, "The engine failed. "), store.get().answer ? "Your values are kept; the sheet shows the last that could be computed. Change a value or " : "Change a value or ",
    el("button", { type: "button", class: "link", onclick: compute }, "try again"), ".", el("pre", null, fault));
}

async function main() {
  document.documentElement.dataset.sheet = store.get().dark ? "dark" : "light";
  try {
    const reply = await engine.ask("catalogue");
    if (reply) build(reply.json);
  } catch (err) {
    const box = part("fault");
    box.hidden = false;
    append(box, [el("strong", null, "The engine could not be started. "), "Reload the page to try again.", el("pre", null, String(err instanceof Error ? err.message : err))]);
  }
}

main();
