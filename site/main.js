// Wires the page: one store, one engine, the views. Nothing else knows all three.

import { nextFrame } from "./base/frame.js";
import { keepDark, wantsDark } from "./base/sheet.js";
import { note } from "./base/timing.js";
import { startEngine } from "./engine/client.js";
import { conduct } from "./engine/conductor.js";
import { workOffline } from "./engine/install.js";
import { startPress } from "./engine/press.js";
import { NO_CALIPERS } from "./model/calipers.js";
import { EMPTY } from "./model/document.js";
import { openShelf } from "./model/kept.js";
import { decodeLink, PREFIX } from "./model/link.js";
import { createStore } from "./model/store.js";
import { FIRST_VIEW, withChoices } from "./model/view.js";
import { takeUp } from "./model/work.js";
import { accountView } from "./views/account.js";
import { announceView } from "./views/announce.js";
import { beforeView } from "./views/before.js";
import { calipersView } from "./views/calipers.js";
import { drawersView } from "./views/drawers.js";
import { faultView, tellAbsent } from "./views/fault.js";
import { fileView } from "./views/file.js";
import { headView } from "./views/head.js";
import { keepWork } from "./views/keeping.js";
import { keptDialog } from "./views/kept.js";
import { globalKeys, keysDialog } from "./views/keys.js";
import { listingView } from "./views/listing.js";
import { mapView } from "./views/map.js";
import { menu } from "./views/menu.js";
import { noticeView } from "./views/notice.js";
import { overviewView } from "./views/overview.js";
import { pictureView } from "./views/picture.js";
import { presentView } from "./views/present.js";
import { presetsDialog } from "./views/presets.js";
import { printDialog } from "./views/print.js";
import { settingsView } from "./views/settings.js";
import { steadyFocus } from "./views/steady.js";
import { tableView } from "./views/table.js";
import { timelineView } from "./views/timeline.js";
import { trialView } from "./views/trial.js";
import { toolbarView } from "./views/toolbar.js";

/** @typedef {import("./model/store.js").State} State */
/** @typedef {import("./engine/wire.js").Catalogue} Catalogue */

/** @param {string} id */
const part = (id) => /** @type {HTMLElement} */ (document.getElementById(id));

const store = createStore({
  plan: EMPTY,
  preset: "",
  kept: null,
  view: FIRST_VIEW,
  answer: null,
  computed: null,
  extra: null,
  scan: null,
  gap: null,
  scene: null,
  diagnoses: [],
  fault: "",
  selected: 0,
  account: null,
  lit: [],
  drawer: "",
  tab: "timeline",
  dark: wantsDark(),
  present: null,
  before: null,
  contrast: null,
  panel: "contrast",
  calipers: NO_CALIPERS,
});

const engine = startEngine(new URL("engine/worker.js", import.meta.url), (busy) => {
  document.body.dataset.busy = String(busy);
});

/** The print service, which starts when it is first asked. @type {import("./engine/press.js").Press | null} */
let press = null;
const pressing = () => (press ??= startPress(new URL("engine/press/worker.js", import.meta.url)));

const { ask, compute, request } = conduct(store, engine);

const shelf = openShelf(() => localStorage);

/** @param {Catalogue} catalogue @param {import("./model/work.js").Found} found */
function build(catalogue, found) {
  const notices = noticeView(part("notices"));
  const file = fileView(store, notices);
  const kept = keptDialog(store, shelf, found.tab, notices);
  keepWork(store, shelf, found, notices, catalogue.presets, { saveFile: file.save, openKept: kept.open });
  const keys = keysDialog();
  const presets = presetsDialog(store, catalogue);
  const print = printDialog(store, pressing);
  const settings = settingsView(part("settings"), store, catalogue, tableView(store, ask));
  const open = {
    presets: presets.open,
    keys: () => keys.showModal(),
    wrong: () => {
      store.set({ drawer: "settings" });
      settings.focusWrong();
    },
  };
  const picture = pictureView(store, catalogue, notices);
  const present = presentView(part("present"), store, picture.fullScreen);
  const files = menu("File", [
    { id: "file-new", label: "New", act: file.fresh },
    { id: "file-open", label: "Open file…", key: "Ctrl O", act: file.open },
    { id: "file-save", label: "Save file", key: "S", act: file.save },
    { id: "file-keep", label: "Keep in this browser", key: "Ctrl S", act: kept.keep },
    { id: "file-kept", label: "Kept plans", key: "Shift K", act: kept.open },
    { id: "file-link", label: "Copy link", key: "L", act: file.copyLink },
    { id: "file-picture", label: "Copy picture", key: "I", act: picture.copy },
    { id: "file-present", label: "Present", key: "T", act: present.toggle },
    { id: "file-screen", label: "Full screen", key: "Z", act: picture.fullScreen },
  ]);
  const before = beforeView(store);
  const calipers = calipersView(store);
  const overview = overviewView(part("overview"), store);
  const views = [
    faultView(part("fault"), store, compute),
    headView(part("head"), store, catalogue.presets, open, [files.node, print.button]),
    settings,
    present,
    toolbarView(part("centre"), store, catalogue, [calipers.tool, before.tool]),
    timelineView(part("centre"), store, ask, catalogue, [calipers.over]),
    listingView(part("centre"), store, engine),
    mapView(part("centre"), store, catalogue, new URL("engine/worker.js", import.meta.url)),
    accountView(part("account"), store, settings.focusSetting, before, overview.jump, catalogue),
    trialView(part("account"), store, ask),
    overview, calipers, before,
    drawersView(part("settings"), part("account"), store),
    announceView(document.body, store),
  ];
  globalKeys(store, {
    "/": () => {
      store.set({ drawer: "settings" });
      settings.focusSearch();
    },
    "?": open.keys,
    p: open.presets,
    "ctrl o": file.open,
    s: file.save,
    "ctrl s": kept.keep,
    k: (e) => (e.shiftKey ? kept.open() : before.toggle()),
    l: file.copyLink,
    "ctrl p": print.open,
    i: picture.copy,
    t: present.toggle,
    z: picture.fullScreen,
    m: calipers.toggle,
    n: overview.jump,
  });

  const pending = new Set(Object.keys(store.get())); // the first time everything is new
  function refresh() {
    const changed = new Set(pending);
    pending.clear();
    const state = store.get();
    if (changed.has("dark")) document.documentElement.dataset.sheet = state.dark ? "dark" : "light";
    const began = performance.now();
    for (const v of views) v.update(state, changed);
    if (changed.has("answer")) note("paint", performance.now() - began);
  }
  store.subscribe((state, changed) => {
    for (const k of changed) pending.add(k);
    if (changed.has("dark")) keepDark(state.dark);
    request(changed);
    nextFrame(refresh);
  });
  nextFrame(refresh);
  compute();
  file.follow();
  steadyFocus(() => document.getElementById("timeline"));
  workOffline((takeOver) => notices.tell("newer", "A newer version of the page is ready.", { acts: [{ label: "Reload", act: takeOver }] }));
}

/** What this tab goes on with: the plan of its link, else its working copy. */
async function opening() {
  const linked = location.hash.startsWith(PREFIX) ? await decodeLink(location.hash).then((read) => read.plan, () => null) : null;
  const found = await takeUp(shelf, () => sessionStorage, navigator.locks, linked);
  const { work } = found;
  const kept = work?.kept ? shelf.read("kept", work.kept.id) : null;
  if (work) store.set({ view: withChoices(store.get().view, work.view), plan: work.plan, preset: work.preset, kept: work.kept && kept && "plan" in kept ? { ...work.kept, title: kept.title } : null });
  return found;
}

/** @type {Promise<import("./model/work.js").Found> | undefined} */
let opened;

async function main() {
  document.documentElement.dataset.sheet = store.get().dark ? "dark" : "light";
  try {
    const [reply, found] = await Promise.all([engine.ask("catalogue"), opened ??= opening()]);
    part("fault").hidden = true;
    if (reply) build(reply.json, found);
  } catch (err) {
    tellAbsent(part("fault"), err, main);
  }
}

main();
