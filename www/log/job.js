/** Reading a log in the worker: the file is never in memory as a whole, nor is the corrected one. */

/** So many bytes at a time: short enough to report, long enough not to wait for the file. */
const SLICE = 1 << 21;

/** So much of the file is looked at to know its characters. */
const HEAD = 1 << 16;

/**
 * Reads a file of `size` bytes, slice by slice from the page, and hands over what is written of the corrected log.
 *
 * @param {{ size: number, options: Record<string, unknown> }} order
 * @param {any} door
 * @param {import("../worker.js").Ask} ask for `{ from, to }`, the bytes of the file; or to take `{ written }`
 * @returns {AsyncGenerator<import("../worker.js").Progress, unknown>} the outcome of the core
 */
export async function* log({ size, options }, door, ask) {
  const reader = new door.LogSlices(options);
  const bytes = async (/** @type {number} */ from) => new Uint8Array(await ask({ from, to: from + SLICE }));
  const hand = (/** @type {Uint8Array} */ written) => ask({ written }, [written.buffer]);
  let next = bytes(0);
  const utf8 = intoUtf8((await next).subarray(0, HEAD));
  for (let from = 0; from < size && !reader.is_refused(); from += SLICE) {
    const slice = await next;
    // The file is read on while the core works.
    next = bytes(from + SLICE);
    reader.push(utf8(slice, from + SLICE >= size));
    const written = reader.take();
    if (written.length > 0) await hand(written);
    yield { share: Math.min(1, (from + SLICE) / size), count: reader.rows() };
  }
  const outcome = reader.finish();
  if (outcome.value?.text !== undefined) await hand(new TextEncoder().encode(outcome.value.text));
  return outcome;
}

/** The step from the file's characters to those of the core; spreadsheets like UTF-16, or Windows' own eight bits. @param {Uint8Array} head @returns {(slice: Uint8Array, last: boolean) => Uint8Array} */
function intoUtf8(head) {
  const label = labelOf(head);
  if (label === "utf-8") return (slice) => slice;
  const [decoder, encoder] = [new TextDecoder(label), new TextEncoder()];
  return (slice, last) => encoder.encode(decoder.decode(slice, { stream: !last }));
}

/** @param {Uint8Array} head */
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
