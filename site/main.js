// Wires the page: one store, one engine, the views. Nothing else knows all three.

import { append, el, fill } from "./base/dom.js";
import { nextFrame } from "./base/frame.js";
import { startEngine } from "./engine/client.js";
import { conduct } from "./engine/conductor.js";
import { createStore } from "./model/store.js";
import { FIRST_VIEW } from "./model/view.js";
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

const { ask, compute, request } = conduct(store, engine);

function wantsDark() {
  const chosen = localStorage.getItem(SHEET);
  return chosen ? chosen === "dark" : matchMedia("(prefers-color-scheme: dark)").matches;
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
