/** Reading a log in the worker: the file is never in memory as a whole, nor is the corrected one. */

/** So many bytes at a time: short enough to report, long enough not to wait for the file. */
const SLICE = 1 << 21;

/** So much of the file is looked at to know its characters. */
const HEAD = 1 << 16;

/**
 * @param {{ file: File, options: Record<string, unknown> }} order
 * @param {any} door
 * @returns {AsyncGenerator<import("../worker.js").Progress, unknown>} the outcome of the core, with the corrected log as a file where it was asked for
 */
export async function* log({ file, options }, door) {
  const reader = new door.LogSlices(options);
  const utf8 = await intoUtf8(file);
  /** @type {Blob[]} */
  const parts = [];
  let next = bytesOf(file, 0);
  for (let from = 0; from < file.size && !reader.is_refused(); from += SLICE) {
    const slice = await next;
    // The file is read on while the core works.
    next = bytesOf(file, from + SLICE);
    reader.push(utf8(slice, from + SLICE >= file.size));
    const written = reader.take();
    if (written.length > 0) parts.push(new Blob([written]));
    yield { share: Math.min(1, (from + SLICE) / file.size), count: reader.rows() };
  }
  const outcome = reader.finish();
  const text = outcome.value?.text;
  if (text === undefined) return outcome;
  delete outcome.value.text;
  return { ...outcome, file: new Blob([...parts, text], { type: "text/csv" }) };
}

/** @param {Blob} file @param {number} from @returns {Promise<Uint8Array<ArrayBuffer>>} */
async function bytesOf(file, from) {
  return new Uint8Array(await file.slice(from, from + SLICE).arrayBuffer());
}

/** The step from the file's characters to those of the core; spreadsheets like UTF-16, or Windows' own eight bits. @param {Blob} file @returns {Promise<(slice: Uint8Array<ArrayBuffer>, last: boolean) => Uint8Array>} */
async function intoUtf8(file) {
  const head = new Uint8Array(await file.slice(0, HEAD).arrayBuffer());
  const label = labelOf(head);
  if (label === "utf-8") return (slice) => slice;
  const [decoder, encoder] = [new TextDecoder(label), new TextEncoder()];
  return (slice, last) => encoder.encode(decoder.decode(slice, { stream: !last }));
}

/** @param {Uint8Array<ArrayBuffer>} head */
export function labelOf(head) {
  if (head[0] === 0xff && head[1] === 0xfe) return "utf-16le";
  if (head[0] === 0xfe && head[1] === 0xff) return "utf-16be";
  try {
    // A character may be cut off at the end.
    new TextDecoder("utf-8", { fatal: true }).decode(head, { stream: true });
    return "utf-8";
  } catch {
    return "windows-1252";
  }
}
