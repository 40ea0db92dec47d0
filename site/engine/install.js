// Puts the site's service worker in place, so that the page works without a network,
// and tells when a newer version has been fetched.

/**
 * @param {(takeOver: () => void) => void} onNewer a newer version is whole and waits
 */
export async function workOffline(onNewer) {
  const { serviceWorker } = navigator;
  if (!serviceWorker) return; // over plain http from elsewhere, or switched off: online only
  let registration;
  try {
    registration = await serviceWorker.register(new URL("../offline.js", import.meta.url), { updateViaCache: "none" });
  } catch {
    return;
  }
  if (!registration) return;

  let asked = false; // this page asked for the newer version
  const served = serviceWorker.controller !== null; // by a version, not yet by the network
  serviceWorker.addEventListener("controllerchange", () => {
    if (asked) location.reload();
    else if (served) onNewer(() => location.reload()); // another tab asked for it
  });

  /** @param {ServiceWorker} worker */
  function waits(worker) {
    onNewer(() => {
      asked = true;
      worker.postMessage("take over");
    });
  }

  if (registration.waiting && serviceWorker.controller) waits(registration.waiting);
  registration.addEventListener("updatefound", () => {
    const worker = registration.installing;
    worker?.addEventListener("statechange", () => {
      if (worker.state === "installed" && serviceWorker.controller) waits(worker);
    });
  });

  serviceWorker.addEventListener("message", (e) => {
    if (e.data === "whole") document.documentElement.dataset.offline = "whole";
  });
  const { active } = await serviceWorker.ready;
  if (/** @type {any} */ (navigator).connection?.saveData) return; // large files only when they are needed
  const idle = window.requestIdleCallback ?? ((/** @type {() => void} */ act) => setTimeout(act, 3000));
  idle(() => active?.postMessage("idle"));
}
