// Long work: the worker's loop, and the page's side with a worker that is none.

import assert from "node:assert/strict";
import { afterEach, beforeEach, describe, test } from "node:test";

import { startWork } from "../../www/work.js";
import { perform } from "../../www/worker.js";

/** All that one job posts. */
async function posted(job, payload, door = () => "door") {
    const messages = [];
    await perform(job, payload, door, (message) => messages.push(message));
    return messages;
}

describe("a job in the worker", () => {
    test("is handed its payload and the door, and its outcome is posted last", async () => {
        const messages = await posted(
            function* (payload, door) {
                yield { share: 0.5, count: 1 };
                return [payload, door];
            },
            7,
        );
        assert.deepEqual(messages, [{ progress: { share: 0.5, count: 1 } }, { done: [7, "door"] }]);
    });

    test("may wait between slices", async () => {
        const messages = await posted(async function* () {
            yield { share: 0, count: 0 };
            return await Promise.resolve("late");
        });
        assert.deepEqual(messages.at(-1), { done: "late" });
    });

    test("does not report more often than a person can follow", async () => {
        const messages = await posted(function* () {
            for (let count = 1; count <= 10_000; count += 1) yield { share: count / 10_000, count };
        });
        assert.ok(messages.length < 1000, `${messages.length} messages`);
        assert.deepEqual(messages.at(-1), { done: undefined });
    });

    test("that throws has failed, and says so once", async () => {
        const thrown = function* () {
            yield { share: 0, count: 0 };
            throw new Error("unreachable");
        };
        assert.deepEqual((await posted(thrown)).at(-1), { failed: "unreachable" });
        const messages = await posted(function* () {}, null, () => {
            throw new Error("no core");
        });
        assert.deepEqual(messages, [{ failed: "no core" }]);
    });

    test("that nobody knows has failed", async () => {
        assert.deepEqual(await posted(undefined), [{ failed: "no such work is known" }]);
    });
});

/** A worker that remembers what it was sent. */
class Told {
    static all = [];
    sent = [];
    ended = false;
    constructor(url) {
        this.url = url;
        Told.all.push(this);
    }
    postMessage(message) {
        this.sent.push(message);
    }
    terminate() {
        this.ended = true;
    }
}

describe("the page's side of a job", () => {
    beforeEach(() => {
        Told.all = [];
        globalThis.Worker = Told;
        globalThis.document = { getElementById: (id) => ({ textContent: { core: "AAEC", glue: "/* glue */", worker: "/* worker */" }[id] }) };
    });
    afterEach(() => {
        delete globalThis.Worker;
        delete globalThis.document;
    });

    const begin = () => {
        const heard = [];
        const note = (what) => (value) => heard.push([what, value]);
        const job = startWork("log", 3, { progress: note("progress"), done: note("done"), failed: note("failed") });
        return { heard, job, worker: Told.all.at(-1), say: (data) => Told.all.at(-1).onmessage({ data }) };
    };

    test("orders the work and passes on what comes back", () => {
        const { heard, worker, say } = begin();
        assert.deepEqual(worker.sent, [{ core: new Uint8Array([0, 1, 2]), name: "log", payload: 3 }]);
        say({ progress: { share: 0.5, count: 2 } });
        assert.equal(worker.ended, false);
        say({ done: "all" });
        assert.deepEqual(heard, [["progress", { share: 0.5, count: 2 }], ["done", "all"]]);
        assert.equal(worker.ended, true, "its memory is given back");
    });

    test("is silent once it is cancelled", () => {
        const { heard, job, worker, say } = begin();
        job.cancel();
        assert.equal(worker.ended, true);
        say({ done: "late" });
        worker.onerror({ message: "late", preventDefault() {} });
        assert.deepEqual(heard, []);
    });

    test("tells a failure once, whoever tells it", () => {
        const { heard, worker, say } = begin();
        worker.onerror({ message: "unreachable", preventDefault() {} });
        say({ failed: "again" });
        assert.deepEqual(heard, [["failed", "unreachable"]]);
        assert.equal(worker.ended, true);
    });

    test("tells that no worker can be made, after it has returned", async () => {
        globalThis.Worker = class {
            constructor() {
                throw new Error("forbidden");
            }
        };
        const heard = [];
        const job = startWork("log", 3, { done: () => heard.push("done"), failed: (message) => heard.push(message) });
        assert.deepEqual(heard, []);
        await Promise.resolve();
        assert.deepEqual(heard, ["forbidden"]);
        job.cancel();
    });
});
