// What this browser keeps: plans by title, and each tab's working copy. Every plan has
// a key of its own, so that a damaged one costs no other. Nothing is written over that
// somebody else wrote meanwhile, and nothing unreadable is thrown away. Holds no DOM.

import { readPlan } from "./document.js";

/** @typedef {import("./path.js").Plan} Plan */

/**
 * @typedef {object} Kept
 * @property {string} id
 * @property {string} title
 * @property {number} saved milliseconds since 1970
 * @property {string} stamp changes with every writing
 * @property {string} preset
 * @property {Plan} plan
 * @property {boolean} idle a working copy that holds nothing of its own
 * @property {{id: string, stamp: string} | null} kept the kept plan that a working copy came from
 * @property {unknown} [view] choices of the view of a working copy
 */

/** @typedef {{id: string, raw: string}} Unreadable */
/** @typedef {{ok: true, stamp: string} | {ok: false, why: "full" | "blocked" | "changed", saved?: number}} Outcome */
/** @typedef {"kept" | "working"} Kind */
/** @typedef {ReturnType<typeof openShelf>} Shelf */

const FORMAT = "escapement-kept/1";
const stem = (/** @type {Kind} */ kind) => `escapement.${kind}.`;

/** A name that no other tab gives. */
export function fresh() {
  return Array.from(crypto.getRandomValues(new Uint32Array(2)), (n) => n.toString(36)).join("");
}

/**
 * @param {() => Storage} open throws where the browser lets nothing be kept
 */
export function openShelf(open) {
  /** @returns {Storage | null} */
  function storage() {
    try {
      return open();
    } catch {
      return null;
    }
  }

  /** @param {Kind} kind @param {string} id @returns {Kept | Unreadable | null} */
  function read(kind, id) {
    const raw = storage()?.getItem(stem(kind) + id) ?? null;
    if (raw === null) return null;
    try {
      const r = JSON.parse(raw);
      if (r.format !== FORMAT || typeof r.title !== "string" || !Number.isFinite(r.saved) || typeof r.stamp !== "string") return { id, raw };
      const { plan } = readPlan(JSON.stringify(r.plan));
      const from = r.kept && typeof r.kept.id === "string" && typeof r.kept.stamp === "string" ? { id: r.kept.id, stamp: r.kept.stamp } : null;
      return { id, title: r.title, saved: r.saved, stamp: r.stamp, preset: String(r.preset ?? ""), plan, idle: r.idle === true, kept: from, view: r.view };
    } catch {
      return { id, raw };
    }
  }

  /**
   * @param {Kind} kind
   * @param {string} id
   * @param {Partial<Kept> & {plan: Plan}} what
   * @param {string | null} [over] the stamp that may be written over; null writes over any
   * @returns {Outcome}
   */
  function write(kind, id, what, over = null) {
    const s = storage();
    if (!s) return { ok: false, why: "blocked" };
    if (over !== null) {
      const there = read(kind, id);
      if (there && "raw" in there) return { ok: false, why: "changed" };
      if (there && there.stamp !== over) return { ok: false, why: "changed", saved: there.saved };
    }
    const stamp = fresh();
    const { title = "", preset = "", plan, idle = false, kept = null, view } = what;
    try {
      s.setItem(stem(kind) + id, JSON.stringify({ format: FORMAT, title, saved: Date.now(), stamp, preset, plan, idle, kept, view }));
    } catch {
      return { ok: false, why: "full" };
    }
    return { ok: true, stamp };
  }

  /** Everything of a kind, the newest first, what cannot be read last. @param {Kind} kind */
  function list(kind) {
    const s = storage();
    /** @type {(Kept | Unreadable)[]} */
    const all = [];
    for (let i = 0; i < (s?.length ?? 0); i++) {
      const key = s?.key(i) ?? "";
      if (!key.startsWith(stem(kind))) continue;
      const found = read(kind, key.slice(stem(kind).length));
      if (found) all.push(found);
    }
    return all.sort((a, b) => ("raw" in a ? 0 : a.saved) < ("raw" in b ? 0 : b.saved) ? 1 : -1);
  }

  return {
    read,
    write,
    list,

    /** Whether anything can be kept at all. */
    usable: () => storage() !== null,

    /** Takes a plan off the shelf; what it returns puts it back. @param {Kind} kind @param {string} id */
    remove(kind, id) {
      const s = storage();
      const raw = s?.getItem(stem(kind) + id) ?? null;
      s?.removeItem(stem(kind) + id);
      return () => {
        if (raw === null) return true;
        try {
          s?.setItem(stem(kind) + id, raw);
          return true;
        } catch {
          return false;
        }
      };
    },
  };
}
