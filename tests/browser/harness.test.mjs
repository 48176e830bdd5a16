// The instruments themselves: what they are there to notice is shown to them, in each engine.

import assert from "node:assert/strict";
import { after, before, describe, test } from "node:test";

import { ENGINES, start } from "./engines.mjs";

const POLICY = `<meta http-equiv="Content-Security-Policy" content="default-src 'none'; script-src 'unsafe-inline'">`;
const page = (head, script) => `<!doctype html><meta charset="utf-8">${head}<title>t</title><script>${script}</script>`;

for (const engine of ENGINES) {
    describe(`instruments in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
        });
        after(() => person?.close());

        test("a quiet page gives nothing to complain about", async () => {
            await person.openPage(page("", "document.title = 'quiet'"));
            await person.until("the script ran", () => document.title === "quiet");
            assert.deepEqual(await person.complaints(), []);
        });

        test("an error in a script is noticed", async () => {
            await person.openPage(page("", "setTimeout(() => { document.title = 'thrown'; throw new Error('planted') })"));
            await person.until("the script ran", () => document.title === "thrown");
            // WebKit hides the text of an error in a file.
            assert.match((await person.complaints()).join("\n"), /planted|Script error/);
        });

        test("a breach of the policy is noticed", async () => {
            await person.openPage(page(POLICY, "fetch('http://unreachable.invalid/').catch(() => { document.title = 'refused' })"));
            await person.until("the request was refused", () => document.title === "refused");
            assert.match((await person.complaints()).join("\n"), /content.security.policy/i);
        });

        test("a request to any host is heard", async () => {
            const { heard, port } = person.listener;
            heard.length = 0;
            const addresses = ["http://somewhere.invalid/name", "https://elsewhere.invalid/name", `http://127.0.0.1:${port}/near`];
            await person.openPage(
                page("", `Promise.allSettled(${JSON.stringify(addresses)}.map((a) => fetch(a, { mode: "no-cors" }))).then(() => { document.title = "sent" })`),
            );
            await person.until("all were sent", () => document.title === "sent");
            assert.ok(heard.includes("GET http://somewhere.invalid/name"), heard.join());
            // WebKit speaks TLS to its proxy at once.
            assert.ok(heard.some((line) => line === "CONNECT elsewhere.invalid:443" || line.startsWith("not HTTP")), heard.join());
            assert.ok(heard.some((line) => line.endsWith("/near")), heard.join());
        });

        test("a barrier to people is noticed", async () => {
            await person.openPage('<!doctype html><html lang="en"><meta charset="utf-8"><title>t</title><main><h1>t</h1><input></main>');
            assert.match((await person.barriers()).join("\n"), /^label: /m);
        });
    });
}
