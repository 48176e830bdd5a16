// The shipped page opens from disk in each engine, without a complaint and without a request.

import assert from "node:assert/strict";
import { test } from "node:test";

import { ENGINES, start } from "./engines.mjs";

for (const engine of ENGINES) {
    test(`the page opens from disk in ${engine}`, async () => {
        const person = await start(engine);
        try {
            await person.openPage();
            assert.match(await person.command("GET", "/title"), /Leastlight/);
            assert.ok(await person.until("the core answers", () => window.leastlight?.version?.() ?? window.leastlight));
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        } finally {
            await person.close();
        }
    });
}
