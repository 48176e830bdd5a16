// A person who doubts: states how well numbers are known, reads the budget, has it checked by trials, cancels them. In each
// engine, from disk. What must be shown comes from the core for Node, asked beside the page.

import assert from "node:assert/strict";
import { createRequire } from "node:module";
import { after, before, describe, test } from "node:test";

import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");

const uncertainty = (question, bench, options) => door.ask(question, bench, options).answer.shown.headline.uncertainty;

for (const engine of ENGINES) {
    describe(`a person who doubts, in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
            await person.openPage();
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
        });
        after(() => person?.close());

        const read = (selector) => person.read(selector);
        const becomes = (wanted) => person.until(`the uncertainty is ${wanted}`, (text) => document.querySelector(".headline-doubt")?.innerText === text, wanted);
        const open = () => person.run(() => (document.getElementById("doubts").open = true));
        const into = async (selector, text) => {
            const element = await person.find(selector);
            await person.run((input) => {
                input.focus();
                input.select();
            }, element);
            await person.type(element, text);
        };

        test("finds the answer with its uncertainty, and the budget that makes it", async () => {
            const { answer } = door.ask("reading", door.demo());
            assert.equal(await read(".headline-doubt"), answer.shown.headline.uncertainty);
            assert.match(await read(".headline-doubt"), /k = .* for 95 %/);
            const titles = await person.run(() => [...document.querySelectorAll("#answer h3, #answer caption")].map((one) => one.innerText));
            assert.ok(titles.some((title) => title.startsWith("Uncertainty budget of the power")), titles.join("; "));
            assert.match(await read("#doubts > summary"), /6 doubts; 6 more for other questions/);
        });

        test("states a doubt anew, and the interval follows each keystroke", async () => {
            await open();
            await into('[data-key="0-half_width"]', "2 nm");
            const bench = door.demo();
            bench.uncertainty.inputs[0].half_width = 2;
            await becomes(uncertainty("reading", bench));
        });

        test("errs in an amount, is told so at its row, and keeps the answer", async () => {
            await into('[data-key="0-half_width"]', "2 kg");
            await person.until("the fault stands at the row", () => document.getElementById("doubt-0-fault")?.innerText.includes("“kg” is not a unit that can stand here"));
            assert.equal(await person.run(() => document.querySelector('[data-key="0-half_width"]').getAttribute("aria-invalid")), "true");
            assert.equal(await person.run(() => document.querySelector("#answer.stale")), null, "the answer itself waits for nothing");
            await into('[data-key="0-half_width"]', "0.5 nm");
            await becomes(uncertainty("reading", door.demo()));
        });

        test("states it in another way", async () => {
            await person.run(() => {
                const select = document.querySelector('[data-key="0-way"]');
                select.value = "expanded";
                select.dispatchEvent(new Event("change", { bubbles: true }));
            });
            const bench = door.demo();
            bench.uncertainty.inputs[0] = { pointer: "/source/wavelength_nm", name: "source wavelength", expanded: 0.5, coverage_factor: 2 };
            await becomes(uncertainty("reading", bench));
            await person.run(() => document.getElementById("undo").click());
            await becomes(uncertainty("reading", door.demo()));
        });

        test("adds a doubt at a field, types its amount where the caret stands, and takes it away", async () => {
            await person.run(() => document.querySelector('[data-doubt="/meter/certificate/scale"]').click());
            assert.equal(await person.run(() => document.activeElement.dataset.key), "12-half_width");
            await person.until("what is missing is said", () => document.getElementById("doubt-12-fault")?.innerText.includes("needs an amount"));
            await into('[data-key="12-half_width"]', "1 %");
            const bench = door.demo();
            bench.uncertainty.inputs.push({ pointer: "/meter/certificate/scale", half_width: 0.01, relative: true });
            await becomes(uncertainty("reading", bench));
            await person.run(() => document.querySelector('[data-key="12-remove"]').click());
            await becomes(uncertainty("reading", door.demo()));
            assert.equal(await person.run(() => document.activeElement.id), "doubts-add", "the focus is not lost");
        });

        test("takes a usual doubt, marked as common practice, and repeated readings", async () => {
            const usual = door.usual_doubts();
            await person.run((value) => {
                const select = document.getElementById("doubts-add");
                select.value = value;
                select.dispatchEvent(new Event("change", { bubbles: true }));
            }, `usual:${usual.findIndex(({ name, question }) => name === "repeated readings" && question === "reading")}`);
            const typed = ["-30.51", "-30.53", "-30.52", "-30.54"];
            await into('[data-key="12-readings"]', typed.join("; "));
            const bench = door.demo();
            bench.uncertainty.inputs.push({ pointer: "/meter/reading_dbm", readings: typed.map(Number) });
            await becomes(uncertainty("reading", bench));
            assert.match(await read("#doubt-12-note"), /4 readings/);
            await person.run(() => document.querySelector('[data-key="12-remove"]').click());
        });

        test("asks for another coverage", async () => {
            await person.run(() => {
                const select = document.querySelector('[data-key="coverage"]');
                select.value = "0.99";
                select.dispatchEvent(new Event("change", { bubbles: true }));
            });
            const bench = door.demo();
            bench.uncertainty.coverage_probability = 0.99;
            await becomes(uncertainty("reading", bench));
            await person.run(() => document.getElementById("undo").click());
        });

        test("has the budget checked by a million trials, and sees the very numbers of the core for Node", async () => {
            await person.run(() => document.getElementById("trials-run").click());
            await person.until("the trials are done", () => document.getElementById("trials-said").innerText.includes("has these trials"));
            const { answer } = door.ask("reading", door.demo(), { trials: true });
            const facts = await person.run(() => [...document.querySelectorAll(".fact")].map((fact) => fact.innerText.replace(/\s+/g, " ")));
            for (const { name, figure } of answer.shown.facts.filter((fact) => fact.name.startsWith("By trials"))) {
                const wanted = `${name} ${figure}`.replace(/\s+/g, " ");
                assert.ok(facts.some((fact) => fact.startsWith(wanted)), `${wanted} is not among ${facts.filter((fact) => fact.startsWith("By trials")).join("; ")}`);
            }
            await person.until("the distribution is drawn", () => [...document.querySelectorAll("figcaption, figure")].some((one) => one.innerText.includes("Trials against the budget")));
            await person.photograph("doubts");
        });

        test("changes the bench, and the trials are called those of another", async () => {
            await into('[data-key="0-half_width"]', "0.6 nm");
            await person.until("the trials are stale", () => document.getElementById("trials-said").innerText.includes("another bench"));
            assert.ok(!(await person.run(() => [...document.querySelectorAll(".fact")].some((fact) => fact.innerText.startsWith("By trials")))));
        });

        test("cancels trials that would take long, and goes on typing meanwhile", async () => {
            await person.run(() => document.querySelector('input[name="question"][value="sensitivity"]').click());
            await into("#trials-trials", "10000000");
            await person.run(() => document.getElementById("trials-run").click());
            await person.until("the trials run", () => !document.getElementById("trials-running").hidden && document.getElementById("trials-progress").value > 0);
            await person.fill("/detector/avalanche/gain", "9");
            const bench = door.demo();
            bench.detector.avalanche.gain = 9;
            bench.uncertainty.inputs[0].half_width = 0.6;
            await becomes(uncertainty("sensitivity", bench));
            await person.run(() => document.getElementById("trials-cancel").click());
            await person.until("nothing runs", () => document.getElementById("trials-running").hidden);
            assert.equal(await person.run(() => document.activeElement.id), "trials-run");
        });

        test("finds the doubts again after a reload", async () => {
            await person.reload();
            await person.until("the doubts are there", () => document.getElementById("doubts-count")?.innerText.includes("more for other questions"));
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
            assert.equal(await person.run(() => document.querySelector('[data-key="0-half_width"]').value), "0.6 nm");
        });

        test("meets no barrier, and the browser complains of nothing", async () => {
            await open();
            assert.deepEqual(await person.barriers(), []);
            assert.deepEqual(await person.complaints(), []);
        });
    });
}
