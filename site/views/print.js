// The Print and export dialog: what is to be printed, a preview of it, and a file.
// The print service starts with the first preview; nothing is loaded before.

import { el, fill, say } from "../base/dom.js";
import { count } from "../base/format.js";
import { fileName } from "../model/document.js";
import { FORMATS, NOTES, orderOf, PAPERS, PRINTS, SPEEDS, GAINS, usualLadder, usualPaper } from "../model/order.js";
import { PAPERS as FORMS12 } from "../model/view.js";
import { Refusal } from "../engine/press.js";
import { dialog } from "./dialog.js";
import { download } from "./file.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../engine/press.js").Press} Press
 * @typedef {import("../model/order.js").Choice} Choice
 */

/** Today as the date field wants it, where the user is. */
const today = () => new Date(Date.now() - new Date().getTimezoneOffset() * 60000).toISOString().slice(0, 10);

/** What the user reads while waiting. */
const STAGES = { loading: "Loading the printing press, about 5 MB. This is done once.", drawing: "Drawing." };

const QUIET_MS = 200; // a choice made with the keyboard passes over others

/**
 * @param {Store} store
 * @param {() => Press} press starts the service where it does not run yet
 */
export function printDialog(store, press) {
  /** @type {Choice} */
  let choice = { print: "strip", format: "pdf", paper: "", range: "view", speed: 25, gain: 10, ladder: "full", device: true, form: "3x4 + rhythm", date: today(), page: 1 };
  let picked = false; // a print was chosen by hand
  let url = "";
  let round = 0; // of previews: an older answer is dropped
  let timer = 0;

  const pick = (/** @type {keyof Choice} */ name, /** @type {string} */ label, /** @type {[string, string][]} */ options) => {
    const select = el("select", { id: `print-${name}`, onchange: () => {
      const now = /** @type {any} */ (choice)[name];
      set({ [name]: typeof now === "number" ? Number(select.value) : select.value });
    } });
    fill(select, options.map(([value, text]) => el("option", { value }, text)));
    return { select, row: el("div", { class: "print-row" }, el("label", { for: `print-${name}` }, label), select) };
  };
  const print = pick("print", "Print", PRINTS);
  const format = pick("format", "As", FORMATS.drawing);
  const paper = pick("paper", "Paper", PAPERS);
  const range = pick("range", "Part", [["view", "what the timeline shows, to the end of the line"], ["whole", "the whole strip"]]);
  const form12 = pick("form", "Form", FORMS12.map((f) => [f, f]));
  const speed = pick("speed", "Speed", SPEEDS.map((v) => [String(v), `${v} mm/s`]));
  const gain = pick("gain", "Gain", GAINS.map((v) => [String(v), `${v} mm/mV`]));
  const ladder = pick("ladder", "Ladder", [["full", "every level"], ["plain", "plain"], ["none", "none"]]);
  const device = el("input", { type: "checkbox", id: "print-device", onchange: () => set({ device: device.checked }) });
  const deviceRow = el("div", { class: "print-row" }, el("label", { for: "print-device" }, "Device"), device);
  const leads = el("output", { class: "print-leads" });
  const leadsRow = el("div", { class: "print-row" }, el("span", { class: "label" }, "Leads"), leads);
  const date = el("input", { type: "date", id: "print-date", onchange: () => set({ date: date.value }) });
  const dateRow = el("div", { class: "print-row" }, el("label", { for: "print-date" }, "Date"), date);

  const picture = el("img", { class: "print-picture", alt: "", hidden: true });
  const says = el("p", { class: "print-says", role: "status" });
  const wrong = el("div", { class: "print-wrong", role: "alert" });
  const back = el("button", { type: "button", "aria-label": "Page before", onclick: () => set({ page: choice.page - 1 }) }, "‹");
  const on = el("button", { type: "button", "aria-label": "Next page", onclick: () => set({ page: choice.page + 1 }) }, "›");
  const where = el("span", { class: "print-page" });
  const turn = el("div", { class: "print-turn", hidden: true }, back, where, on);
  const save = el("button", { type: "submit", id: "print-save", class: "main" }, "Save");
  const form = el("form", { class: "print-form", onsubmit: (/** @type {Event} */ e) => { e.preventDefault(); keep(); } },
    print.row, format.row, paper.row, range.row, speed.row, gain.row, form12.row, leadsRow, ladder.row, deviceRow, dateRow,
    el("p", { class: "hint" }, "No names and no numbers of patients: the title of the plan and this date are all that is printed beside the drawing."), save);
  const frame = el("div", { class: "print-frame" }, picture);
  const box = dialog("Print and export", "print", el("div", { class: "print-body" }, form,
    el("div", { class: "print-view" }, says, wrong, frame, turn)));
  box.addEventListener("keydown", (e) => {
    if ((e.ctrlKey || e.metaKey) && e.key.toLowerCase() === "p") {
      e.preventDefault(); // not the browser's own print of the dialog
      if (!save.disabled) keep();
    }
  });
  box.addEventListener("close", () => {
    round++;
    clearTimeout(timer);
    show(null);
  });

  /** @param {Partial<Choice>} patch */
  function set(patch) {
    choice = { ...choice, page: 1, ...patch };
    if ("print" in patch) {
      picked = true;
      choice.format = FORMATS[choice.print === "data" ? "data" : "drawing"][0][0];
      choice.paper = usualPaper(choice.print);
      choice.ladder = choice.print === "twelve" ? "none" : usualLadder(store.get().view);
    }
    paint();
    clearTimeout(timer);
    timer = window.setTimeout(preview, QUIET_MS);
  }

  /** Shows what is chosen, and of it only what has a meaning. */
  function paint() {
    const { view, answer, before } = /** @type {any} */ (store.get());
    const data = choice.print === "data";
    const text = choice.print === "report" || choice.print === "comparison";
    for (const o of print.select.options) o.hidden = o.disabled = o.value === "comparison" && !before;
    for (const o of paper.select.options) o.hidden = o.disabled = o.value === "roll" && text;
    for (const o of ladder.select.options) o.hidden = o.disabled = o.value === "none" && choice.print === "ladder";
    fill(format.select, FORMATS[data ? "data" : "drawing"].map(([value, name]) => el("option", { value }, name)));
    for (const [field, select] of /** @type {[keyof Choice, HTMLSelectElement][]} */ ([["print", print.select], ["format", format.select], ["paper", paper.select], ["range", range.select], ["speed", speed.select], ["gain", gain.select], ["ladder", ladder.select], ["form", form12.select]])) select.value = String(choice[field]);
    device.checked = choice.device;
    if (date.value !== choice.date) date.value = choice.date;
    for (const row of [paper.row, range.row, speed.row, ladder.row, dateRow]) row.hidden = data;
    gain.row.hidden = data || choice.print === "ladder";
    form12.row.hidden = choice.print !== "twelve";
    leadsRow.hidden = choice.print === "ladder" || choice.print === "twelve" || (data && choice.format !== "edf");
    deviceRow.hidden = data || !answer?.device || choice.ladder === "none";
    frame.hidden = data;
    say(leads, data ? "all twelve" : lanesSaid(view));
    say(save, `Save ${FORMATS.drawing.concat(FORMATS.data).find(([f]) => f === choice.format)?.[1] ?? ""}`);
  }

  /** Which lanes are printed, in a few words. @param {import("../model/view.js").View} view */
  function lanesSaid(view) {
    const others = view.lanes.filter((l) => /^(egm|membrane):/.test(l)).length;
    const of = view.paper && choice.print === "strip" ? `twelve leads ${view.paper}` : view.leads.length === 12 ? "all twelve" : view.leads.join(", ") || "none";
    return `${of}${others > 0 ? ` and ${count(others, "other signal")}` : ""}, as on the timeline`;
  }

  /** @param {Blob | null} blob */
  function show(blob) {
    if (url) URL.revokeObjectURL(url);
    url = blob ? URL.createObjectURL(blob) : "";
    picture.hidden = !blob;
    if (blob) picture.src = url;
    else picture.removeAttribute("src");
  }

  /** @param {unknown} err */
  function tell(err) {
    const words = err instanceof Refusal ? err.diagnoses : null;
    fill(wrong, words
      ? [el("strong", null, "It cannot be printed so. "), el("ul", null, words.map((d) => el("li", null, d.text)))]
      : [el("strong", null, "The print service failed. "), "Your plan and your choices are kept. ", el("button", { type: "button", class: "link", onclick: preview }, "Try again"),
        ".", el("pre", null, err instanceof Error ? err.message : String(err))]);
  }

  /** @param {boolean} busy @param {string} text */
  function busy(busy, text) {
    frame.classList.toggle("stale", busy);
    box.setAttribute("aria-busy", String(busy));
    say(says, text);
  }

  async function preview() {
    clearTimeout(timer);
    const mine = ++round;
    fill(wrong);
    turn.hidden = true;
    const state = store.get();
    if (state.diagnoses.length > 0 || !state.answer) {
      show(null);
      save.disabled = true;
      busy(false, state.diagnoses.length > 0
        ? `${count(state.diagnoses.length, "value")} of the plan ${state.diagnoses.length === 1 ? "is" : "are"} wrong. A print needs a plan that can be computed: close this and mend it in the settings.`
        : "Nothing is computed yet.");
      return;
    }
    save.disabled = false;
    if (choice.print === "data") {
      show(null);
      busy(false, NOTES[choice.format]);
      return;
    }
    busy(true, picture.hidden ? "Preparing the preview." : "Drawing.");
    try {
      const printed = await press().preview(`${choice.print}.svg`, orderOf(state, choice), (stage) => {
        if (mine === round) busy(true, STAGES[stage]);
      });
      if (!printed || mine !== round) return;
      show(printed.blob);
      picture.alt = `Preview of page ${choice.page}`;
      turn.hidden = printed.pages < 2;
      say(where, `Page ${choice.page} of ${printed.pages}`);
      back.disabled = choice.page <= 1;
      on.disabled = choice.page >= printed.pages;
      busy(false, choice.format === "pdf" || printed.pages < 2 ? `${count(printed.pages, "page")}, ${kind()}.` : `Page ${choice.page} of ${printed.pages} is saved; a PDF holds them all.`);
    } catch (err) {
      if (mine !== round) return;
      show(null);
      save.disabled = err instanceof Refusal;
      busy(false, "");
      tell(err);
    }
  }

  const kind = () => (choice.paper === "roll" ? "as large as the drawing" : `${paper.select.selectedOptions[0]?.textContent ?? ""}, true to scale`);

  async function keep() {
    const state = store.get();
    const taken = { ...choice };
    fill(wrong);
    save.disabled = true;
    busy(true, "Printing.");
    try {
      const route = taken.print === "data" ? `strip.${taken.format}` : `${taken.print}.${taken.format}`;
      const { blob } = await press().print(route, orderOf(state, taken), (stage) => busy(true, STAGES[stage]));
      const name = fileName(state.plan, state.answer?.title ?? "").replace(/\.json$/, `${taken.print === "data" ? "" : `-${taken.print}`}.${taken.format}`);
      download(blob, name);
      busy(false, `Saved as ${name}, ${Math.max(1, Math.round(blob.size / 1024))} kB.`);
    } catch (err) {
      busy(false, "");
      tell(err);
    } finally {
      save.disabled = false;
    }
  }

  function open() {
    const { view } = store.get();
    const { before } = /** @type {any} */ (store.get());
    if (!before && choice.print === "comparison") choice.print = "strip";
    else if (before && !picked) Object.assign(choice, { print: "comparison", paper: usualPaper("comparison") });
    choice = {
      ...choice, page: 1, paper: choice.paper || usualPaper(choice.print), form: view.paper || choice.form,
      speed: SPEEDS.includes(view.mm_per_s) ? view.mm_per_s : 25, gain: GAINS.includes(view.mm_per_mv) ? view.mm_per_mv : 10,
      ladder: choice.print === "twelve" ? "none" : usualLadder(view), device: !view.no_device,
    };
    paint();
    box.showModal();
    preview();
  }

  const button = el("button", { type: "button", id: "print", onclick: open, title: "Ctrl P", "aria-haspopup": "dialog" }, "Print");
  return { button, open };
}
