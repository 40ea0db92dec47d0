# The print service on an edge host, as the tests run it. `make edge` makes build/.
using Workerd = import "/workerd/workerd.capnp";

const config :Workerd.Config = (
  services = [(name = "press", worker = .press)],
  sockets = [(name = "http", address = "127.0.0.1:0", http = (), service = "press")],
);

const press :Workerd.Worker = (
  modules = [
    (name = "worker.mjs", esModule = embed "build/worker.mjs"),
    (name = "runtime.mjs", esModule = embed "build/runtime.mjs"),
    (name = "wasm_exec.js", esModule = embed "build/wasm_exec.js"),
    (name = "app.wasm", wasm = embed "build/app.wasm"),
  ],
  compatibilityDate = "2026-11-01",
);
