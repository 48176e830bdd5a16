// The core built for Node answers as the native library does, to the bit.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { test } from "node:test";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");

/** Written by the native test `replay`. */
const lines = readFileSync(new URL("../../target/replay.jsonl", import.meta.url), "utf8").trim().split("\n");

test("the same bits come back for every question", () => {
    assert.ok(lines.length > 60, `${lines.length} calls`);
    for (const line of lines) {
        const { question, bench, options, result } = JSON.parse(line);
        // Strict equality of Node's own kind: numbers by Object.is, so that no last bit is forgiven.
        assert.deepStrictEqual(door.ask(question, bench, options), result);
    }
});
