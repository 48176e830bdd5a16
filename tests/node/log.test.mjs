// Logs by the built core for Node: the native core's very bits, in one text and in slices.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { test } from "node:test";
import { setFlagsFromString } from "node:v8";
import { runInNewContext } from "node:vm";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");
const calls = JSON.parse(readFileSync(new URL("../../target/replay-log.json", import.meta.url), "utf8"));

setFlagsFromString("--expose-gc");
const collect = runInNewContext("gc");

test("the built core reads a log to the same bits as the native one", () => {
    assert.ok(calls.length > 1);
    for (const { text, options, value } of calls) {
        assert.ok(value.corrected.count > 0 && value.text.length > 1000);
        assert.deepEqual(door.read_log(text, options).value, value);
    }
});

test("slices give what the whole text gives", () => {
    for (const { text, options, value } of calls) {
        const reader = new door.LogSlices(options);
        const bytes = Buffer.from(text);
        let written = "";
        for (let from = 0; from < bytes.length; from += 1000) {
            reader.push(bytes.subarray(from, from + 1000));
            written += Buffer.from(reader.take());
        }
        assert.equal(reader.rows() > 0 && reader.is_refused(), false);
        const outcome = reader.finish();
        assert.equal(written + outcome.value.text, value.text);
        assert.deepEqual({ ...outcome.value, text: value.text }, value);
    }
});

test("the memory does not grow with the log", () => {
    const row = "2026-11-30T14:05:09,-20.131,OK\n";
    const slice = Buffer.from(row.repeat(50_000));
    const reader = new door.LogSlices({ bench: door.demo(), corrected: {} });
    reader.push(Buffer.from("Time,Power (dBm),Status\n"));
    const held = () => process.memoryUsage().arrayBuffers + process.memoryUsage().external;
    for (let count = 0; count < 4; count += 1) reader.push(slice) ?? reader.take();
    collect();
    const before = held();
    // Some 60 MB more.
    for (let count = 0; count < 40; count += 1) reader.push(slice) ?? reader.take();
    // What was taken and let go is not held; the collector is asked, for it comes when it likes.
    collect();
    assert.ok(held() - before < 30e6, `${(held() - before) / 1e6} MB`);
    assert.equal(reader.finish().value.counts.read, 44 * 50_000);
});

test("what is wrong comes with what was understood", () => {
    const { faults, reading } = door.read_log("Time,Power\n0,1\n1,2\n", {});
    assert.equal(faults[0].pointer, "/choices/columns");
    assert.deepEqual(reading.columns.map(({ role }) => role), ["time", "power"]);
    const strict = new door.LogSlices({ choises: {} });
    strict.push(Buffer.from("Power (W)\n1\n"));
    assert.equal(strict.is_refused(), true);
    assert.equal(strict.finish().faults[0].code, "unknown_field");
});
