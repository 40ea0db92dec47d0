// Plans that come and go: files opened, dropped and saved, links copied and followed.

import { el } from "../base/dom.js";
import { EMPTY, fileName, MAX_BYTES, NotAPlan, readPlan, writePlan } from "../model/document.js";
import { decodeLink, encodeLink, PREFIX } from "../model/link.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/path.js").Plan} Plan
 * @typedef {import("./notice.js").Notices} Notices
 */

/**
 * Puts a plan on the page in place of the present one, as one step of undo.
 * @param {Store} store
 * @param {Plan} plan
 * @param {Partial<import("../model/store.js").State>} [also]
 */
export function show(store, plan, also) {
  const { view } = store.get();
  store.edit(plan, "", { preset: "", kept: null, selected: 0, lit: [], view: { ...view, t0_ms: 0 }, ...also });
}

/**
 * Saves a text or a picture as a file.
 * @param {Blob} blob
 * @param {string} name
 */
export function download(blob, name) {
  const url = URL.createObjectURL(blob);
  el("a", { href: url, download: name }).click();
  setTimeout(() => URL.revokeObjectURL(url), 10000);
}

/**
 * @param {Store} store
 * @param {Notices} notices
 */
export function fileView(store, notices) {
  const input = el("input", {
    type: "file", id: "open-file-input", accept: ".json,application/json", hidden: true, "aria-label": "Plan file",
    onchange: () => {
      const file = input.files?.[0];
      input.value = "";
      if (file) open(file);
    },
  });
  const target = el("div", { class: "drop", hidden: true, "aria-hidden": "true" }, el("p", null, "Drop a plan file to open it"));
  document.body.append(input, target);

  /** @param {string} name @param {unknown} err */
  function refuse(name, err) {
    if (!(err instanceof NotAPlan)) throw err;
    notices.tell("open", `${name} was not opened. ${err.message} The page is as it was.`, { wrong: true });
  }

  /**
   * Shows what was read. What is wrong in it stands at its fields; the timeline is
   * that of the plan before until it is mended.
   * @param {string} name
   * @param {{plan: Plan, told: string[]}} read
   */
  function take(name, { plan, told }) {
    const unsubscribe = store.subscribe((state, changed) => {
      if (state.plan !== plan) unsubscribe();
      else if (changed.has("answer")) {
        unsubscribe();
        if (told.length > 0) notices.tell("open", `${name} was opened. ${told.join(" ")}`, { wrong: true });
      } else if (changed.has("diagnoses")) {
        unsubscribe();
        const rest = state.answer ? " Until they are mended the sheet shows the plan before." : "";
        notices.tell("open", `${name} was opened; some of its values are wrong and stand marked in Settings.${rest} ${told.join(" ")}`.trim(), { wrong: true });
      }
    });
    notices.clear("open");
    show(store, plan);
  }

  /** @param {File} file */
  async function open(file) {
    try {
      if (file.size > MAX_BYTES) throw new NotAPlan(`It has ${file.size} bytes; allowed: up to ${MAX_BYTES}.`);
      let text;
      try {
        text = new TextDecoder("utf-8", { fatal: true }).decode(await file.arrayBuffer());
      } catch {
        throw new NotAPlan("It cannot be read as UTF-8 text.");
      }
      take(file.name, readPlan(text));
    } catch (err) {
      refuse(file.name, err);
    }
  }

  function save() {
    const { plan, answer } = store.get();
    const name = fileName(plan, answer?.title ?? "");
    download(new Blob([writePlan(plan)], { type: "application/json" }), name);
    notices.tell("save", `Saved as ${name}.`);
  }

  async function copyLink() {
    try {
      const link = `${location.origin}${location.pathname}${await encodeLink(store.get().plan)}`;
      const field = el("input", { type: "text", readOnly: true, value: link, "aria-label": "Link to this plan" });
      try {
        await navigator.clipboard.writeText(link);
        notices.tell("link", `The link is copied: ${link.length} letters. The whole plan is in it; following it sends nothing to a server.`);
      } catch {
        notices.tell("link", "This browser does not let the page copy. The link is: ", { more: [field] });
        field.select();
      }
    } catch (err) {
      if (!(err instanceof NotAPlan)) throw err;
      notices.tell("link", `No link was made. ${err.message}`, { wrong: true });
    }
  }

  /** Follows the link in the page's address, where there is one. */
  async function follow() {
    if (!location.hash.startsWith(PREFIX)) return;
    try {
      const read = await decodeLink(location.hash);
      take("The link", read);
      linked = read.plan;
    } catch (err) {
      refuse("The link", err);
      forget();
    }
  }

  /** The address names the plan until it is changed: then a reload must find the change. */
  let linked = /** @type {Plan | null} */ (null);
  function forget() {
    linked = null;
    history.replaceState(null, "", location.pathname + location.search);
  }
  store.subscribe((state, changed) => {
    if (linked && changed.has("plan") && state.plan !== linked) forget();
  });

  let depth = 0; // of elements that a file is held over
  /** @param {DragEvent} e */
  function drag(e) {
    if (!e.dataTransfer?.types.includes("Files")) return;
    e.preventDefault();
    depth += e.type === "dragenter" ? 1 : e.type === "dragleave" ? -1 : 0;
    if (e.type === "drop") {
      depth = 0;
      const file = e.dataTransfer.files[0];
      if (file) open(file);
    }
    target.hidden = depth <= 0;
  }
  for (const type of /** @type {const} */ (["dragenter", "dragover", "dragleave", "drop"])) document.addEventListener(type, drag);
  window.addEventListener("hashchange", follow);

  return {
    fresh: () => show(store, EMPTY),
    open: () => input.click(),
    save,
    copyLink,
    follow,
    destroy() {
      for (const type of /** @type {const} */ (["dragenter", "dragover", "dragleave", "drop"])) document.removeEventListener(type, drag);
      window.removeEventListener("hashchange", follow);
      input.remove();
      target.remove();
    },
  };
}
