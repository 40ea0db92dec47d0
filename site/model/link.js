// A whole plan in the fragment of the page's address: JSON, deflated with a checksum
// (zlib), base64url. A fragment never reaches a server. The command line has the same
// code in engine/plan/link; the tests read each other's. Holds no DOM.

import { NotAPlan, readPlan } from "./document.js";

/** @typedef {import("./path.js").Plan} Plan */

export const PREFIX = "#plan=";

/** Largest plan that a link unpacks to: a few kilobytes could unpack to gigabytes. */
export const MAX_LINK_BYTES = 1 << 20;

/**
 * The fragment that carries a plan.
 * @param {Plan} plan
 * @returns {Promise<string>}
 * @throws {NotAPlan} where the plan is too large for a link
 */
export async function encodeLink(plan) {
  const text = new TextEncoder().encode(JSON.stringify(plan));
  if (text.length > MAX_LINK_BYTES) throw new NotAPlan(`A plan of ${text.length} bytes is too large for a link; allowed: up to ${MAX_LINK_BYTES}.`);
  const packed = await through(text, new CompressionStream("deflate"), Infinity);
  let letters = "";
  for (const b of packed ?? []) letters += String.fromCharCode(b);
  return PREFIX + btoa(letters).replaceAll("+", "-").replaceAll("/", "_").replace(/=+$/, "");
}

/**
 * The plan in a fragment, or in an address with one.
 * @param {string} text
 * @returns {Promise<{plan: Plan, told: string[]}>}
 * @throws {NotAPlan} with what is wrong, in words
 */
export async function decodeLink(text) {
  const at = text.indexOf(PREFIX);
  if (at < 0) throw new NotAPlan(`It holds no plan; allowed: an address that goes on with ${PREFIX} and the plan.`);
  const body = text.slice(at + PREFIX.length);
  if (body === "") throw new NotAPlan(`Nothing stands after ${PREFIX}.`);
  const odd = /[^A-Za-z0-9_-]/u.exec(body);
  if (odd) throw new NotAPlan(`It holds ${JSON.stringify(odd[0])} at place ${odd.index + 1}; allowed: letters, digits, - and _.`);
  if (body.length % 4 === 1) throw new NotAPlan("It is cut off.");
  const packed = Uint8Array.from(atob(body.replaceAll("-", "+").replaceAll("_", "/")), (c) => c.charCodeAt(0));
  let bytes;
  try {
    bytes = await through(packed, new DecompressionStream("deflate"), MAX_LINK_BYTES);
  } catch {
    throw new NotAPlan("It was cut off or changed on its way.");
  }
  if (!bytes) throw new NotAPlan(`It unpacks to more than ${MAX_LINK_BYTES} bytes; allowed: up to ${MAX_LINK_BYTES}.`);
  let json;
  try {
    json = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    throw new NotAPlan("It holds bytes that are not UTF-8.");
  }
  return readPlan(json);
}

const PIECE = 4096; // bytes handed over at a time, so that a hostile link is stopped early

/**
 * Bytes through a transformation, or null where more than a limit comes out.
 * @param {Uint8Array} bytes
 * @param {CompressionStream | DecompressionStream} transform
 * @param {number} limit
 */
async function through(bytes, transform, limit) {
  const writer = transform.writable.getWriter();
  const reader = transform.readable.getReader();
  const fed = (async () => {
    for (let i = 0; i < bytes.length; i += PIECE) await writer.write(bytes.slice(i, i + PIECE));
    await writer.close();
  })();
  fed.catch(() => {}); // the reader hears of it too
  /** @type {Uint8Array[]} */
  const out = [];
  let size = 0;
  for (;;) {
    const { value, done } = await reader.read();
    if (done) break;
    size += value.length;
    if (size > limit) {
      await reader.cancel();
      return null;
    }
    out.push(value);
  }
  await fed;
  const whole = new Uint8Array(size);
  let at = 0;
  for (const piece of out) {
    whole.set(piece, at);
    at += piece.length;
  }
  return whole;
}
