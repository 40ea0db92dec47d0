// The page without a network: a service worker that keeps one whole version of the
// site. Every file is checked by its hash before it is kept, so that versions never
// mix; a newer version is fetched beside the old one and waits until the page asks.
// A classic script that imports nothing. `make site` fills in the list.

"use strict";

/** @type {{version: string, files: Record<string, string>, later: Record<string, string>}} */
const SITE = /* stamp */ { version: "", files: {}, later: {} };

const worker = /** @type {any} */ (self);
const STEM = "escapement-";
const CACHE = STEM + SITE.version;
const address = (/** @type {string} */ name) => new URL(name === "index.html" ? "./" : name, worker.registration.scope).href;

/** @param {ArrayBuffer} bytes */
async function hash(bytes) {
  return Array.from(new Uint8Array(await crypto.subtle.digest("SHA-256", bytes)), (b) => b.toString(16).padStart(2, "0")).join("");
}

/**
 * Puts a file of this version into the cache; from an older cache where it is the same.
 * @param {Cache} cache
 * @param {string} name
 * @param {string} want
 */
async function keep(cache, name, want) {
  const url = address(name);
  if (await cache.match(url)) return;
  const old = await caches.match(url);
  if (old && (await hash(await old.clone().arrayBuffer())) === want) {
    await cache.put(url, old);
    return;
  }
  const fetched = await fetch(url, { cache: "no-cache", credentials: "same-origin" });
  if (!fetched.ok) throw new Error(`${name}: the server answered ${fetched.status}`);
  const got = await hash(await fetched.clone().arrayBuffer());
  if (got !== want) throw new Error(`${name} is not that of version ${SITE.version}`);
  await cache.put(url, fetched);
}

/** @param {Record<string, string>} files */
async function keepAll(files) {
  const cache = await caches.open(CACHE);
  await Promise.all(Object.entries(files).map(([name, want]) => keep(cache, name, want)));
}

worker.addEventListener("install", (/** @type {any} */ e) => {
  if (SITE.version !== "") e.waitUntil(keepAll(SITE.files));
});

worker.addEventListener("activate", (/** @type {any} */ e) => {
  e.waitUntil((async () => {
    for (const name of await caches.keys()) if (name.startsWith(STEM) && name !== CACHE) await caches.delete(name);
    await worker.clients.claim();
  })());
});

worker.addEventListener("message", (/** @type {any} */ e) => {
  if (e.data === "take over") worker.skipWaiting();
  // A failure leaves the file to be fetched when it is needed, or at the next idle time.
  if (e.data === "idle") e.waitUntil(keepAll(SITE.later).then(() => e.source?.postMessage("whole"), () => {}));
});

worker.addEventListener("fetch", (/** @type {any} */ e) => {
  const { request } = e;
  const url = new URL(request.url);
  if (request.method !== "GET" || url.origin !== location.origin || !url.href.startsWith(worker.registration.scope)) return;
  e.respondWith((async () => {
    const cache = await caches.open(CACHE);
    const page = request.mode === "navigate" && /\/(index\.html)?$/.test(url.pathname);
    return (await cache.match(page ? address("index.html") : request, { ignoreSearch: page })) ?? fetch(request);
  })());
});
