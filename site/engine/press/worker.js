// The host of the print service: the workers library's own runtime, in a module
// worker. The library answers a Request with a Response and starts a fresh Go
// instance for each; what is added here is how a failure is told.

export {}; // a module, with names of its own

const scope = /** @type {any} */ (self);

/** The last lines the instance wrote: a failure that ends it is told in them. */
let output = "";

/** Ends the request that runs, if any. @type {(err: Error) => void} */
let fail = () => {};

// The runtime compiles while its module loads. A server that does not have the file,
// or names its type wrongly, is no reason for a bare TypeError.
const streaming = WebAssembly.compileStreaming;
WebAssembly.compileStreaming = async (/** @type {Response | PromiseLike<Response>} */ source) => {
  const response = await source;
  if (!response.ok) throw new Error(`${new URL(response.url).pathname}: the server answered ${response.status}`);
  const type = response.headers.get("Content-Type") ?? "";
  return type.startsWith("application/wasm") ? streaming(response) : WebAssembly.compile(await response.arrayBuffer());
};

const HOST = "./build/worker.js"; // made by `make site`
const RUNTIME = "./build/runtime.js"; // holds the compiled module, from which every request gets an instance

async function load() {
  const host = (await import(HOST)).default;
  const decoder = new TextDecoder();
  scope.fs.writeSync = (/** @type {number} */ _fd, /** @type {Uint8Array} */ bytes) => {
    output = (output + decoder.decode(bytes, { stream: true })).slice(-4000);
    return bytes.length;
  };
  // An instance that ends before its answer would leave the request open for ever.
  scope.Go = class extends scope.Go {
    constructor() {
      super();
      this.exit = (/** @type {number} */ code) => {
        if (code !== 0) fail(new Error(output || `the print service ended with ${code}`));
      };
    }
  };
  await (await import(RUNTIME)).loadModule();
  return host;
}

const ready = load();
ready.catch(() => {}); // told with the first request

scope.addEventListener("unhandledrejection", (/** @type {PromiseRejectionEvent} */ e) => {
  e.preventDefault();
  fail(e.reason instanceof Error ? e.reason : new Error(String(e.reason)));
});

scope.onmessage = async (/** @type {MessageEvent} */ e) => {
  const { number, url, body } = e.data;
  output = "";
  try {
    scope.postMessage({ number, stage: "loading" });
    const host = await ready;
    scope.postMessage({ number, stage: "drawing" });
    const broken = new Promise((_, reject) => {
      fail = reject;
    });
    // Not a Request: not every browser lets the body of one be read.
    const request = { url, method: "POST", headers: new Headers({ "Content-Type": "application/json" }), body: new Response(body).body };
    const answer = async () => {
      const response = await host.fetch(request);
      return { status: response.status, headers: Object.fromEntries(response.headers), bytes: await response.arrayBuffer() };
    };
    const { status, headers, bytes } = await Promise.race([answer(), broken]);
    scope.postMessage({ number, status, headers, bytes }, [bytes]);
  } catch (err) {
    scope.postMessage({ number, fault: err instanceof Error ? err.message : String(err) });
  }
};
