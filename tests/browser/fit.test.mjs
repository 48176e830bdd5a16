// A person with a device nobody knows: drops a sweep of currents, types the rest, reads what the points tell and what they do
// not, and puts the device on the bench. In each engine, from disk. What must be shown comes from the core for Node.

import assert from "node:assert/strict";
import { createRequire } from "node:module";
import { after, before, describe, test } from "node:test";

import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");

/** Currents of a device with 56.4 V, exponent 2.6, as an instrument of a country of decimal commas writes them. */
const SWEEP = `Ansa Ridge, Werkstatt
Spannung (V);Dunkelstrom (nA);Strom bei Licht (µA)
${[8, 14, 20, 26, 32, 38, 42, 46, 49, 51, 53, 54, 55]
    .map((volt, i) => [volt, (15 + 0.1 * i).toFixed(1), ((2e0 / (1 - (volt / 56.4) ** 2.6)) * (1 + 0.003 * Math.sin(5 * i)) + 0.015 + 1e-4 * i).toFixed(4)].join(";").replaceAll(".", ","))
    .join("\n")}
`;

for (const engine of ENGINES) {
    describe(`a person with an unknown device in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
            await person.openPage();
            await person.run(() => document.querySelector('input[name="question"][value="device_fit"]').click());
        });
        after(() => person?.close());

        const headline = () => person.read(".headline-figure");
        const headlineBecomes = (wanted) =>
            person.until(`the headline is ${wanted}`, (text) => document.querySelector(".headline-figure")?.innerText === text, wanted);
        const figure = (bench) => door.ask("device_fit", bench).answer.shown.headline.figure;
        const press = (text) => person.run((wanted) => [...document.querySelectorAll("button")].find((one) => one.innerText === wanted && !one.closest("[hidden]")).click(), text);

        const choose = (pointer, value) =>
            person.run((name, wanted) => {
                const select = document.forms.bench.elements.namedItem(name);
                select.value = wanted;
                select.dispatchEvent(new Event("input", { bubbles: true }));
            }, pointer, value);

        test("finds the demonstration device fitted, with what is left of each point", async () => {
            await headlineBecomes(figure(door.demo()));
            await person.until("the charts are drawn", () => document.querySelectorAll("svg.chart").length >= 8);
            const dots = await person.run(() => document.querySelectorAll("svg.chart .dots circle").length);
            assert.ok(dots > 2 * door.demo().measurements.iv.points.length, `${dots} points`);
            assert.match(await person.read("#answer"), /Correlation of what the photocurrent tells/);
            await person.photograph("device-fit");
            assert.deepEqual(await person.barriers(), []);
        });

        test("walks along the measured points by key", async () => {
            await person.run(() => document.querySelector("svg.chart").focus());
            await person.press("ArrowDown");
            await person.press("Home");
            assert.match(await person.read(".readout"), /measured: Reverse voltage 8\.000 V, Gain /);
        });

        test("drops a sweep of another device and sees how it was read", async () => {
            await person.dropFile("#measurements-iv-points", "Kennlinie.csv", SWEEP);
            await person.until("the sweep is in the field", () => document.forms.bench.elements.namedItem("/measurements/iv/points").value.includes("Werkstatt"));
            const read = await person.read('[data-table="/measurements/iv/points"] .read-as');
            assert.match(read, /13 rows/);
            const roles = await person.run(() => [...document.querySelectorAll('[data-table="/measurements/iv/points"] [data-choice^="role-"]')].map((one) => one.value));
            assert.deepEqual(roles, ["voltage", "dark_current", "current"]);
            const typed = { measurements: { ...door.demo().measurements, iv: { table: { text: SWEEP } } } };
            const { bench } = door.understand(typed, "auto");
            await headlineBecomes(figure(bench));
        });

        test("is told what these points do not tell, and what to measure", async () => {
            assert.match(await person.read(".doubts"), /series resistance is not determined.*more light/s);
        });

        test("chooses the voltage of unity gain, wrongly and rightly", async () => {
            const free = await headline();
            await person.fill("/measurements/unity_gain_v", "5 V");
            await person.until("the answer is dimmed", () => document.querySelector("#answer.stale"));
            assert.equal(await person.run(() => document.getElementById("onto-bench").disabled), true);
            await person.fill("/measurements/unity_gain_v", "8 V");
            await person.until("the answer is not dimmed", () => !document.querySelector("#answer.stale"));
            assert.notEqual(await headline(), free);
            await person.fill("/measurements/unity_gain_v", "");
            await headlineBecomes(free);
        });

        test("lets wild points count by their size", async () => {
            await choose("/measurements/estimator", "huber");
            await person.until("Huber is named", () => document.querySelector(".notes").innerText.includes("Huber’s estimate"));
            await choose("/measurements/estimator", "least_squares");
            await person.until("squares are named", () => document.querySelector(".notes").innerText.includes("Least squares"));
        });

        test("puts the device on the bench in one step, and takes it back", async () => {
            const before = await person.value("/detector/avalanche/bias/breakdown_v");
            const typed = { measurements: { ...door.demo().measurements, iv: { table: { text: SWEEP } } } };
            const { answer } = door.ask("device_fit", door.understand(typed, "auto").bench);
            await press("Put this device on the bench");
            for (const { pointer, value } of answer.onto_bench.values) {
                const wanted = typeof value === "number" ? door.write_number(pointer, value, "auto") : value;
                assert.equal(await person.value(pointer), wanted, pointer);
            }
            assert.equal(await person.run(() => document.getElementById("undo").title), "Put this device on the bench");
            // Its doubts come with it, in the place of those that stood there.
            const doubts = await person.run(() => JSON.parse(JSON.parse(localStorage.getItem(Object.keys(localStorage).find((key) => key.endsWith("state")))).texts["/uncertainty"]));
            for (const { pointer, standard } of answer.onto_bench.uncertainty.inputs) {
                const stated = doubts.inputs.filter((one) => one.pointer === pointer);
                assert.deepEqual(stated.map((one) => one.standard), [door.write_number(pointer, standard, "auto")], pointer);
            }
            assert.equal(doubts.correlations.length, answer.onto_bench.uncertainty.correlations.length);
            await press("Undo");
            assert.equal(await person.value("/detector/avalanche/bias/breakdown_v"), before);
            await press("Redo");
            await person.run(() => document.querySelector('input[name="question"][value="avalanche_bias"]').click());
            await person.until("the bias is that of the new device", () => document.querySelector(".headline") && !document.querySelector("#answer.stale"));
        });

        test("keeps the measurements over a reload and in a file", async () => {
            await person.reload();
            assert.match(await person.value("/measurements/iv/points"), /Werkstatt/);
        });

        test("and all the while there was no complaint and no request", async () => {
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        });
    });
}
