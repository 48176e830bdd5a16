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

// The colours of the dark scheme are others, so they are looked at by themselves.
for (const engine of ["chromium", "firefox"]) {
    test(`the page has no barrier in the dark in ${engine}`, async () => {
        const person = await start(engine, { dark: true });
        try {
            await person.openPage();
            assert.ok(await person.run(() => matchMedia("(prefers-color-scheme: dark)").matches), "it is dark");
            for (const question of ["sensitivity", "reading"]) {
                await person.run((name) => document.querySelector(`input[name="question"][value="${name}"]`).click(), question);
                await person.photograph(`${question}-dark`);
                assert.deepEqual(await person.barriers(), [], question);
            }
        } finally {
            await person.close();
        }
    });
}
