// A person who sets an avalanche bias: opens the question, reads the bias, types the device, pastes measured gains, saves the
// table for the supply, and is told when there is no such bias. In each engine, from disk. What must be shown comes from the
// core for Node.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { after, before, describe, test } from "node:test";

import { waitForFile } from "./downloads.mjs";
import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");
const BIAS = "/detector/avalanche/bias";

/** Gains of an invented device, as a technician with decimal commas wrote them down. */
const GAINS = "Sperrspannung (V);Verstärkung\n30;1,19\n38;1,62\n44;2,71\n47,5;4,4\nvierzig;9\n50;8,3\n51,5;15,9\n52,3;33\n";

const shown = (bench) => door.ask("avalanche_bias", bench).answer.shown;

for (const engine of ENGINES) {
    describe(`a person setting a bias in ${engine}`, () => {
        let person;
        const bench = door.demo();
        before(async () => {
            person = await start(engine);
            await person.openPage();
        });
        after(() => person?.close());

        const headlineBecomes = (wanted) =>
            person.until(`the headline is ${wanted}`, (text) => document.querySelector(".headline-figure")?.innerText === text, wanted);
        const boxIsOpen = () => person.run((group) => document.querySelector(`details[data-group="${group}"]`).open, BIAS);
        const ask = (question) => person.run((name) => document.querySelector(`input[name="question"][value="${name}"]`).click(), question);
        const pick = async (name, value) => {
            const field = await person.field(name);
            await person.run((select, wanted) => {
                select.value = wanted;
                select.dispatchEvent(new Event("input", { bubbles: true }));
            }, field, value);
        };
        const press = (text) => person.run((wanted) => [...document.querySelectorAll("button")].find((one) => one.innerText === wanted && !one.closest("[hidden]")).click(), text);

        test("opens the question, and the inputs that belong to it", async () => {
            assert.equal(await boxIsOpen(), false, "the first question has no use for them");
            await ask("avalanche_bias");
            await headlineBecomes(shown(bench).headline.figure);
            assert.equal(await boxIsOpen(), true);
            assert.match(await person.read(".cautions-named"), /bias voltage, overload current/);
            assert.match(await person.read("#cautions"), /qualified persons/);
        });

        test("types the breakdown voltage of another device", async () => {
            await person.fill(`${BIAS}/breakdown_v`, "61,2 V");
            bench.detector.avalanche.bias.breakdown_v = 61.2;
            await headlineBecomes(shown(bench).headline.figure);
            await person.fill(`${BIAS}/breakdown_v_per_k`, "120 mV/K");
            bench.detector.avalanche.bias.breakdown_v_per_k = 0.12;
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("sees the table for the supply and saves it as CSV", async () => {
            const [table] = shown(bench).tables;
            const cells = await person.run(() => [...document.querySelector(".table-view").querySelectorAll("tbody tr")].map((row) => [...row.cells].map((cell) => cell.innerText)));
            assert.deepEqual(cells, table.rows);
            await press("Save CSV");
            const text = readFileSync(await waitForFile(person.scratch, /\.csv$/), "utf8");
            const rows = text.trim().split("\r\n").map((line) => line.split(","));
            assert.deepEqual(rows[0], table.columns);
            assert.deepEqual(rows.slice(1), table.rows.map((row) => row.map((cell) => cell.replaceAll("−", "-"))));
        });

        test("closes the box over a wrong field, and has it opened at the fault", async () => {
            await person.fill(`${BIAS}/table_step_k`, "0.001 K");
            await person.run((group) => (document.querySelector(`details[data-group="${group}"]`).open = false), BIAS);
            await person.fill("/surroundings/temperature_c", "15 °C");
            assert.equal(await boxIsOpen(), true, "a fault in a closed box would not be seen");
            const fault = await person.field(`${BIAS}/table_step_k`).then((field) => person.run((input) => document.getElementById(`${input.id}-fault`).innerText, field));
            assert.match(fault, /at most 500 rows/);
            await person.fill(`${BIAS}/table_step_k`, "5 K");
            await person.fill("/surroundings/temperature_c", "14 °C");
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("pastes measured gains, and sees how they were read", async () => {
            await pick(`${BIAS}/kind`, "table");
            await person.giveFile("#detector-avalanche-bias-points-file", "gains.csv", GAINS);
            const read = await person.until("it says how it was read", (name) => {
                const box = document.querySelector(`[data-table="${name}"] .read-as`);
                return !box.hidden && box.innerText;
            }, `${BIAS}/points`);
            assert.match(read, /7 rows/);
            assert.match(read, /Line 6, “vierzig;9”/);
            const chosen = await person.run((name) => [...document.querySelectorAll(`[data-table="${name}"] .read-columns select`)].map((one) => one.value), `${BIAS}/points`);
            assert.deepEqual(chosen, ["voltage", "V", "gain", "1"]);
            const points = GAINS.split("\n").slice(1).filter((line) => /^\d/.test(line)).map((line) => line.replaceAll(",", ".").split(";").map(Number));
            const { miller_exponent: _, ...others } = bench.detector.avalanche.bias;
            bench.detector.avalanche.bias = { ...others, kind: "table", points: points.map(([bias_v, gain]) => ({ bias_v, gain })) };
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("describes the excess noise by an exponent", async () => {
            await pick("/detector/avalanche/excess_noise/kind", "power");
            await person.until("the answer waits", () => document.querySelector("#answer.stale"));
            assert.match(await person.read("#state-line"), /Detector: exponent of the gain/);
            await person.fill("/detector/avalanche/excess_noise/exponent", "0.7");
            bench.detector.avalanche.excess_noise = { kind: "power", exponent: 0.7 };
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("is told why there is no such bias", async () => {
            await person.fill("/detector/avalanche/gain_bandwidth_hz", "1 GHz");
            await headlineBecomes("No such bias");
            assert.match(await person.read(".headline"), /any gain makes the detector too slow/);
            await person.fill("/detector/avalanche/gain_bandwidth_hz", "70 GHz");
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("takes a PIN and is told that it has no gain to set", async () => {
            await pick("detector-type", "pin");
            await person.until("the answer waits", () => document.querySelector("#answer.stale"));
            assert.match(await person.read("#part-detector-fault"), /A bias needs an avalanche detector/);
            await pick("detector-type", "avalanche");
            await headlineBecomes(shown(bench).headline.figure);
        });

        test("reloads and finds all as it was", async () => {
            await person.reload();
            await headlineBecomes(shown(bench).headline.figure);
            assert.equal(await boxIsOpen(), true);
        });

        test("finds no barrier, on a laptop and on a phone", async () => {
            for (const [width, height] of [[1366, 768], [390, 844]]) {
                await person.resize(width, height);
                await person.photograph(`avalanche_bias-${width}`);
                assert.deepEqual(await person.barriers(), [], `at ${width}`);
            }
            await person.resize(1366, 768);
        });

        test("and all the while there was no complaint and no request", async () => {
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        });
    });
}
