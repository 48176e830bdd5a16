/** The core: taken out of the page, started, and started afresh should it ever trap. */

/** @typedef {import("./door.js").Door} Door */

/** @typedef {Door & { initSync(source: { module: BufferSource | WebAssembly.Module }): unknown }} Glue */

/** @returns {Glue} what the binding script left as a global */
const glue = () => /** @type {any} */ (globalThis).wasm_bindgen;

/** @type {WebAssembly.Module | null} */
let compiled = null;

/** The compiled core, for a worker; nothing before the start. */
export const coreModule = () => compiled;

/** The core that the page carries, as it was built. */
export const coreBytes = () => bytes((document.getElementById("core")?.textContent ?? "").trim());

/** Decodes and starts the core that the page carries. */
export function start() {
  compiled = new WebAssembly.Module(coreBytes());
  glue().initSync({ module: compiled });
}

/** @param {string} base64 @returns {Uint8Array<ArrayBuffer>} */
function bytes(base64) {
  const native = /** @type {any} */ (Uint8Array).fromBase64;
  if (native) return native.call(Uint8Array, base64);
  const binary = atob(base64);
  const out = new Uint8Array(binary.length);
  for (let i = 0; i < binary.length; i += 1) out[i] = binary.charCodeAt(i);
  return out;
}

/**
 * Starts a fresh core from the compiled module. The binding script keeps one instance for good, so its own text is
 * run once more; the content security policy knows that text.
 *
 * @returns {boolean} whether a fresh core runs
 */
function restart() {
  const before = glue();
  const script = document.createElement("script");
  script.textContent = document.getElementById("glue")?.textContent ?? "";
  document.head.append(script);
  script.remove();
  if (glue() === before || !compiled) return false;
  glue().initSync({ module: compiled });
  return true;
}

/** @type {(message: string, fresh: boolean) => void} */
let report = () => {};

/** @param {(message: string, fresh: boolean) => void} listener called when the core has trapped */
export function onTrap(listener) {
  report = listener;
}

/**
 * Calls the core. A trap is a mistake of ours: it is reported, and nothing typed is lost.
 *
 * @template T
 * @param {(door: Door) => T} use
 * @param {T} otherwise
 * @returns {T}
 */
function guarded(use, otherwise) {
  try {
    return use(glue());
  } catch (error) {
    report(String(error instanceof Error ? error.message : error), restart());
    return otherwise;
  }
}

/** What stands where a trap took the answer: a fault that no field owns. */
const failed = () => [{ pointer: "", code: "unreadable", sentence: "The calculation failed; change something and it is tried again." }];

/** The door as the page uses it: plain values out, no exception. @type {Door} */
export const core = {
  questions: () => guarded((door) => door.questions(), []),
  fields: () => guarded((door) => door.fields(), []),
  version: () => guarded((door) => door.version(), ""),
  demo: () => guarded((door) => door.demo(), {}),
  ask: (question, bench, options) => guarded((door) => door.ask(question, bench, options), { faults: failed() }),
  understand: (typed, mark) => guarded((door) => door.understand(typed, mark), { bench: {}, understood: {}, tables: {}, faults: failed() }),
  follow: (question, typed, mark) =>
    guarded((door) => door.follow(question, typed, mark), { understood: {}, tables: {}, faults: failed(), blocking: failed(), answer: null }),
  read_certificate: (text, choices) => guarded((door) => door.read_certificate(text, choices), { faults: failed() }),
  read_responsivity: (text, choices) => guarded((door) => door.read_responsivity(text, choices), { faults: failed() }),
  read_bench: (text) => guarded((door) => door.read_bench(text), { faults: failed() }),
  write_number: (pointer, value, mark) => guarded((door) => door.write_number(pointer, value, mark), String(value)),
  write_table: (pointer, bench, mark) => guarded((door) => door.write_table(pointer, bench, mark), { faults: failed() }),
};
