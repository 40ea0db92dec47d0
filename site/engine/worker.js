// The host of the WebAssembly module: loads it, hands it one request at a time
// and sends back what it says. A classic script, since wasm_exec.js is one.

/* global importScripts */
"use strict";

const scope = /** @type {any} */ (self);

/** The last lines the module wrote: a failure that ends it is told in them. */
let output = "";

function listen() {
  const keep = { decoder: new TextDecoder() };
  scope.fs.writeSync = (/** @type {number} */ _fd, /** @type {Uint8Array} */ bytes) => {
    output = (output + keep.decoder.decode(bytes, { stream: true })).slice(-4000);
    return bytes.length;
  };
}

async function load() {
  const fetched = fetch("escapement.wasm"); // on its way while the script below loads
  scope.importScripts("wasm_exec.js");
  listen();
  const go = new scope.Go();
  const response = await fetched;
  if (!response.ok) throw new Error(`escapement.wasm: the server answered ${response.status}`);
  const { instance } = await instantiate(response, go.importObject);
  const ended = go.run(instance).then(() => {
    throw new Error(output || "the engine ended by itself");
  });
  // The module registers its function before it first waits, so it is there now.
  if (typeof scope.call !== "function") await ended;
  ended.catch((/** @type {Error} */ err) => scope.postMessage({ number: 0, fault: err.message }));
}

/**
 * @param {Response} response
 * @param {WebAssembly.Imports} imports
 */
async function instantiate(response, imports) {
  const type = response.headers.get("Content-Type") ?? "";
  if (type.startsWith("application/wasm")) return WebAssembly.instantiateStreaming(response, imports);
  return WebAssembly.instantiate(await response.arrayBuffer(), imports); // a host that names the type wrongly
}

const ready = load();

scope.onmessage = async (/** @type {MessageEvent} */ e) => {
  const { number, op, json } = e.data;
  try {
    await ready;
    const began = performance.now();
    const reply = scope.call(op, json);
    const ms = performance.now() - began;
    if (reply.fault) {
      scope.postMessage({ number, fault: reply.fault });
      return;
    }
    const points = reply.points ?? null;
    scope.postMessage({ number, json: reply.json, points, ms }, points ? [points.buffer] : []);
  } catch (err) {
    const words = err instanceof Error ? err.message : String(err);
    scope.postMessage({ number, fault: output || words });
  }
};
