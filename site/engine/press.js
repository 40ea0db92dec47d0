// The page's side of the print service: promises over a worker that is started with
// the first request, since most visits print nothing. One request runs at a time.
// Behind it waits at most one preview; a newer one takes its place. What is to be
// saved waits its turn and is never dropped.

import { Fault } from "./client.js";

/** @typedef {import("./wire.js").Diagnosis} Diagnosis */

/** The service said no: to the plan, or to how it was to be printed. */
export class Refusal extends Error {
  /** @param {number} status @param {Diagnosis[]} diagnoses */
  constructor(status, diagnoses) {
    super(diagnoses.map((d) => d.text).join("\n"));
    this.status = status;
    this.diagnoses = diagnoses;
  }
}

/**
 * What is to be printed; the names are those of wasm/press/service.
 * @typedef {object} Order
 * @property {any} plan
 * @property {any} [before]
 * @property {string} [paper]
 * @property {number} [speed_mm_s]
 * @property {number} [gain_mm_mv]
 * @property {string[]} [leads]
 * @property {string[]} [lanes] from top to bottom, in place of the leads
 * @property {number} [egm_gain] mm/mV
 * @property {string} [paper_form] the twelve leads as on paper, "3x4 + rhythm"
 * @property {boolean} [fill] the window goes on to the end of its last line
 * @property {"full" | "plain" | "none"} [ladder]
 * @property {boolean} [device]
 * @property {number} [from_ms]
 * @property {number} [to_ms] 0 is the end of the strip
 * @property {number} [dots_mm]
 * @property {number} [page] from 1
 * @property {string} [date]
 * @property {string} [version]
 */

/** @typedef {{blob: Blob, pages: number}} Printed */

/** What the service is at: it is loaded once, and draws after that. @typedef {"loading" | "drawing"} Stage */

/**
 * @typedef {object} Waiting
 * @property {number} number
 * @property {string} route
 * @property {Order} order
 * @property {boolean} preview
 * @property {(printed: Printed | null) => void} resolve null when a newer preview took its place
 * @property {(err: Error) => void} reject
 * @property {(stage: Stage) => void} [tell]
 */

/** @typedef {ReturnType<typeof startPress>} Press */

/**
 * @param {URL} url of the worker's script
 */
export function startPress(url) {
  /** @type {Worker | null} */
  let worker = null;
  /** @type {Waiting | null} */
  let running = null;
  /** @type {Waiting[]} */
  let waiting = [];
  let last = 0;

  function living() {
    if (worker) return worker;
    const w = new Worker(url, { type: "module" });
    w.onmessage = (e) => receive(e.data);
    w.onerror = (e) => {
      e.preventDefault();
      fail(new Fault(e.message || "the print service could not be started"));
    };
    worker = w;
    return w;
  }

  function end() {
    worker?.terminate();
    worker = null;
  }

  /** @param {{number: number, status?: number, headers?: Record<string, string>, bytes?: ArrayBuffer, fault?: string, stage?: Stage}} reply */
  function receive({ number, status = 0, headers = {}, bytes = new ArrayBuffer(0), fault, stage }) {
    const r = running;
    if (!r || number !== r.number) return;
    if (stage !== undefined) {
      r.tell?.(stage);
      return;
    }
    if (fault !== undefined) {
      fail(new Fault(fault));
      return;
    }
    running = null;
    const type = headers["content-type"] ?? "";
    if (status === 200) r.resolve({ blob: new Blob([bytes], { type }), pages: Number(headers["x-pages"] ?? 1) });
    else {
      const told = JSON.parse(new TextDecoder().decode(bytes));
      r.reject(told.fault ? new Fault(told.fault) : new Refusal(status, told.diagnoses ?? []));
    }
    next();
  }

  /** @param {Fault} fault */
  function fail(fault) {
    end();
    const r = running;
    running = null;
    r?.reject(fault);
    next();
  }

  function next() {
    const r = running ? undefined : waiting.shift();
    if (!r) return;
    running = r;
    living().postMessage({ number: r.number, url: new URL(`/press/${r.route}`, location.href).href, body: JSON.stringify(r.order) });
  }

  /**
   * @param {string} route "strip.pdf" and so on
   * @param {Order} order
   * @param {boolean} preview
   * @param {(stage: Stage) => void} [tell]
   * @returns {Promise<Printed | null>}
   */
  function ask(route, order, preview, tell) {
    return new Promise((resolve, reject) => {
      last++;
      if (preview) {
        for (const w of waiting) if (w.preview) w.resolve(null);
        waiting = waiting.filter((w) => !w.preview);
      }
      waiting.push({ number: last, route, order, preview, resolve, reject, tell });
      next();
    });
  }

  return {
    /** @param {string} route @param {Order} order @param {(stage: Stage) => void} [tell] */
    async print(route, order, tell) {
      const printed = await ask(route, order, false, tell);
      if (!printed) throw new Fault("the print was dropped");
      return printed;
    },
    /** @param {string} route @param {Order} order @param {(stage: Stage) => void} [tell] */
    preview: (route, order, tell) => ask(route, order, true, tell),
    stop() {
      end();
      running?.resolve(null);
      for (const w of waiting) w.resolve(null);
      running = null;
      waiting = [];
    },
  };
}

/**
 * A strip as a picture to copy: one sheet as large as its drawing, 8 dots a millimetre.
 * @param {Press} press
 * @param {Order} order
 */
export async function pictureOf(press, order) {
  const { blob } = await press.print("strip.png", { ...order, paper: "roll", dots_mm: 8 });
  return blob;
}
