// A person with a log of readings: opens it, sees how it was understood, changes that, waits, cancels, saves. In each engine,
// from disk. What must be shown comes from the core for Node, asked beside the page.

import assert from "node:assert/strict";
import { closeSync, existsSync, mkdtempSync, openSync, readFileSync, readdirSync, rmSync, statSync, writeSync } from "node:fs";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { after, before, describe, test } from "node:test";
import { setTimeout as pause } from "node:timers/promises";

import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");

/** A log as a meter in a country of decimal commas might write it, with what goes wrong in a night. */
const SMALL = `Messung;Bank 4
Wellenlänge;1310 nm

Zeit;Leistung (µW);Bereich;Status
2026-11-30T14:05:09,250;9,70;R2;OK
2026-11-30T14:05:09,500;9,71;R2;OK
2026-11-30T14:05:09,750;9.91E37;R2;OK
2026-11-30T14:05:10,000;9,7x;R2;OK
2026-11-30T14:05:10,250;12,00;R2;WARMING
2026-11-30T14:05:10,500;9,69;R2;OK
`;

const ROWS = 1_000_000;

/** A day and more of readings; the same on every machine. @param {string} path */
function writeLong(path) {
    const file = openSync(path, "w");
    const begin = Date.UTC(2026, 10, 30, 14, 5, 9);
    let [text, seed] = ["Time;Wavelength (nm);Power (dBm);Range;Status\n", 1];
    for (let row = 0; row < ROWS; row += 1) {
        seed = (Math.imul(seed, 1103515245) + 12345) >>> 0;
        const power = row === 654_321 ? "-17.500" : row % 5000 === 4999 ? "9.91E37" : (-20.13 - row * 1e-7 + (seed / 2 ** 32 - 0.5) * 0.1).toFixed(3);
        text += `${new Date(begin + row * 100).toISOString().slice(0, -1)};1310;${power};-20;OK\n`;
        if (text.length > 1 << 20) {
            writeSync(file, text);
            text = "";
        }
    }
    writeSync(file, text);
    closeSync(file);
}

/** What the core for Node makes of a file, in slices of another size than the page's. */
function readAside(path, options) {
    const reader = new door.LogSlices(options);
    const bytes = readFileSync(path);
    for (let from = 0; from < bytes.length; from += 777_777) {
        reader.push(bytes.subarray(from, from + 777_777));
        reader.take();
    }
    return reader.finish();
}

const folder = mkdtempSync(join(tmpdir(), "leastlight-log-"));
const long = join(folder, "Nacht 1.csv");
writeLong(long);
const expected = readAside(long, { bench: door.demo() }).value;
after(() => rmSync(folder, { recursive: true, force: true }));

for (const engine of ENGINES) {
    describe(`a person with a log in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
            await person.openPage();
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
        });
        after(() => person?.close());

        const shown = () => person.read("#log-view");
        const figureBecomes = (wanted) => person.until(`the figure is ${wanted}`, (text) => document.querySelector(".log-figure")?.innerText === text, wanted);
        const press = (text) => person.run((wanted) => [...document.querySelectorAll("#log button")].find((one) => one.innerText.startsWith(wanted) && !one.closest("[hidden]")).click(), text);
        const choose = (key, value) =>
            person.run(
                (name, to) => {
                    const select = document.querySelector(`#log [data-choice="${name}"]`);
                    select.value = to;
                    select.dispatchEvent(new Event("change", { bubbles: true }));
                },
                key,
                value,
            );
        const aside = (choices = {}) => door.read_log(SMALL, { bench: door.demo(), choices });

        test("finds the place for a log with the question about readings only", async () => {
            assert.match(await person.read("#log"), /A log of readings/);
            await person.run(() => document.querySelector('input[name="question"][value="sensitivity"]').click());
            assert.equal(await person.run(() => document.getElementById("log").hidden), true);
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
            assert.equal(await person.run(() => document.getElementById("log").hidden), false);
        });

        test("opens a log and sees how it was understood and what came of it", async () => {
            await person.giveFile("#log-file", "Nacht.csv", SMALL);
            const { value } = aside();
            await figureBecomes(value.shown.headline.figure);
            const text = await shown();
            assert.match(text, /Line 8.*9,7x/s, "the bad row is named by its line");
            assert.match(text, /“WARMING” \(1 row\)/);
            assert.match(text, /from a line above the rows of the log/);
            const chosen = await person.run(() => [...document.querySelectorAll("#log .read-as select")].map((one) => one.value));
            assert.deepEqual(chosen.slice(0, 3), ["semicolon", "comma", "file"]);
            assert.deepEqual(await person.run(() => [...document.querySelectorAll('#log [data-choice^="role-"]')].map((one) => one.value)), ["time", "power", "range", "status"]);
            await person.until("the end is said", () => document.getElementById("said").innerText.startsWith("Nacht.csv read"));
        });

        test("lets another status count, keeps the focus, and takes it back", async () => {
            await person.run(() => {
                const box = document.querySelector('#log [data-choice="status-1"]');
                box.focus();
                box.click();
            });
            await figureBecomes(aside({ good_status: ["OK", "WARMING"] }).value.shown.headline.figure);
            assert.equal(await person.run(() => document.activeElement.dataset.choice), "status-1");
            await press("Recognise it anew");
            await figureBecomes(aside().value.shown.headline.figure);
        });

        test("takes the setting from the bench instead", async () => {
            await choose("setting", "bench");
            await figureBecomes(aside({ setting: "bench" }).value.shown.headline.figure);
            await choose("setting", "file");
        });

        test("is asked for what cannot be known, and chooses it", async () => {
            await person.giveFile("#log-file", "bare.csv", "Time,Power\n0,-20\n1,-21\n");
            await person.until("it is asked", () => document.querySelector("#log-view .fault")?.innerText.includes("choose the unit"));
            await choose("unit-1", "dBm");
            await person.until("it is read", () => document.querySelector(".log-figure")?.innerText.endsWith("dBm"));
        });

        test("drops a log onto its place", async () => {
            await person.dropFile("#log", "dropped.csv", SMALL);
            await figureBecomes(aside().value.shown.headline.figure);
            assert.match(await shown(), /dropped\.csv/);
        });

        test("saves the corrected log, which the core takes back", async () => {
            await press("Save corrected CSV");
            const file = await waitFor("the download is there", () => findFile(person.scratch, /^dropped\.corrected.*\.csv$/));
            const { value } = door.read_log(SMALL, { bench: door.demo(), corrected: {} });
            assert.equal(readFileSync(file, "utf8"), value.text);
            const again = door.read_log(readFileSync(file, "utf8"), { bench: door.demo() });
            assert.deepEqual(again.value.counts, value.counts);
        });

        test("changes the bench, is told that the log is behind, and has it corrected anew", async () => {
            const before = await person.read(".log-figure");
            await person.fill("/source/wavelength_nm", "1600 nm");
            await person.until("it is told", () => !document.getElementById("log-changed").hidden);
            assert.equal(await person.read(".log-figure"), before);
            await press("Correct it anew");
            await person.until("it is corrected", (text) => document.querySelector(".log-figure").innerText !== text && document.getElementById("log-changed").hidden, before);
            await person.run(() => document.getElementById("undo").click());
        });

        test("reads Windows' eight bits and UTF-16 as well", async () => {
            const codes = { "utf16.csv": Buffer.from(`\ufeff${SMALL}`, "utf16le"), "eight.csv": Buffer.from(SMALL, "latin1") };
            for (const [name, bytes] of Object.entries(codes)) {
                await person.giveFile("#log-file", name, bytes);
                await person.until(`${name} is read`, (file) => document.querySelector("#log-view h4")?.innerText === file && document.querySelector(".log-figure"), name);
                assert.match(await shown(), /Leistung \(µW\)/, name);
            }
        });

        test("cancels a long one on the way, and nothing comes after", async () => {
            const focused = await person.find("#log-file").then(async (input) => {
                await person.run(() => {
                    // As soon as rows are counted, the button that ends it is pressed.
                    new MutationObserver((_, observer) => {
                        if (!/[1-9].* rows so far/.test(document.getElementById("log-rows").textContent)) return;
                        observer.disconnect();
                        const button = document.getElementById("log-cancel");
                        button.focus();
                        button.click();
                    }).observe(document.getElementById("log-rows"), { childList: true, characterData: true, subtree: true });
                });
                await person.type(input, long);
                await person.until("it is told", () => document.getElementById("log-told").innerText.includes("not read to its end"));
                return person.run(() => document.activeElement.id);
            });
            assert.equal(focused, "log", "the focus stays near");
            await pause(1500);
            assert.equal(await person.run(() => document.querySelector(".log-figure")), null);
            assert.equal(await person.run(() => document.getElementById("log-progress").hidden), true);
        });

        test("reads a million rows while the page stays awake", async (t) => {
            await person.run(() => {
                const noted = { longest: 0, begun: 0, done: 0, progress: 0 };
                let last = performance.now();
                window.noted = noted;
                noted.timer = setInterval(() => {
                    noted.longest = Math.max(noted.longest, performance.now() - last);
                    last = performance.now();
                }, 10);
                document.getElementById("log-file").addEventListener("change", () => (noted.begun = performance.now()), { once: true, capture: true });
                new MutationObserver(() => (noted.progress += 1)).observe(document.getElementById("log-rows"), { childList: true, characterData: true, subtree: true });
                new MutationObserver((_, observer) => {
                    if (!document.querySelector("#log-view .log-figure")) return;
                    noted.done = performance.now();
                    observer.disconnect();
                }).observe(document.getElementById("log-view"), { childList: true });
            });
            await person.type(await person.find("#log-file"), long);
            await waitFor("the million rows are read", () => person.run(() => window.noted.done > 0));
            assert.equal(await person.read(".log-figure"), expected.shown.headline.figure);
            const { begun, done, longest, progress } = await person.run(() => {
                clearInterval(window.noted.timer);
                return window.noted;
            });
            t.diagnostic(`${engine}: ${ROWS} rows, ${statSync(long).size} bytes: ${Math.round(done - begun)} ms; the page was away for ${Math.round(longest)} ms at most; ${progress} reports`);
            assert.ok(done > begun, "the clock ran");
            assert.ok(progress >= 2, "progress was shown");
            assert.ok(longest < 2000, `the page was away for ${longest} ms`);
            const facts = await person.run(() => Object.fromEntries([...document.querySelectorAll("#log-view .fact")].map((fact) => [fact.querySelector("dt").innerText, fact.querySelector(".figure").innerText])));
            for (const { name, figure } of expected.shown.facts) assert.equal(facts[name], figure, name);
        });

        test("finds the one spike among a million rows in the chart, by keyboard", async () => {
            await person.run(() => document.querySelector("#log-view svg.chart").focus());
            await person.press("ArrowDown");
            const { lines } = expected.curves[0];
            const spike = Math.max(...lines[1].y);
            assert.ok(spike > Math.max(...lines[0].y) + 1, "it stands out");
            const data = await person.run(() => {
                const details = document.querySelector("#log-view .chart-tools details");
                details.open = true;
                details.dispatchEvent(new Event("toggle"));
                return [...details.querySelectorAll("tbody tr")].length;
            });
            assert.equal(data, lines[0].x.length);
            assert.match(await person.read("#log-view .readout"), /^greatest: Time after the first row/);
        });

        test("saves a million corrected rows", async () => {
            await press("Save corrected CSV");
            const file = await waitFor("the download is there", () => findFile(person.scratch, /^Nacht.1\.corrected.*\.csv$/));
            const again = readAside(file, { bench: door.demo() }).value;
            assert.deepEqual(again.counts, expected.counts);
            assert.deepEqual(again.raw.mean_w, expected.raw.mean_w);
        });

        test("finds no barrier, on a laptop and on a phone, and nothing to scroll sideways", async () => {
            await person.giveFile("#log-file", "Nacht.csv", SMALL);
            await figureBecomes(aside().value.shown.headline.figure);
            for (const [width, height] of [[1366, 768], [390, 844]]) {
                await person.resize(width, height);
                await person.run(() => document.getElementById("log").scrollIntoView());
                await person.photograph(`log-${width}`);
                assert.deepEqual(await person.barriers(), [], `at ${width}`);
                assert.equal(await person.run(() => document.documentElement.scrollWidth - document.documentElement.clientWidth), 0);
            }
        });

        test("and all the while there was no complaint and no request", async () => {
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        });
    });
}

/** A million rows and their download take a while on a machine that does much else. */
async function waitFor(what, find) {
    for (let tries = 0; tries < 1200; tries += 1) {
        const found = await find();
        if (found) return found;
        await pause(100);
    }
    throw new Error(`waited 120 s in vain until ${what}`);
}

/** A file that has its whole length: it has not grown for a while, for a busy browser writes with pauses. */
function findFile(path, pattern) {
    const name = existsSync(path) && readdirSync(path).find((one) => pattern.test(one));
    const file = name && join(path, name);
    const size = file ? statSync(file).size : 0;
    const last = seen.get(file);
    if (last?.size !== size) seen.set(file, { size, since: Date.now() });
    return size > 0 && last?.size === size && Date.now() - last.since > STILL_MS ? file : undefined;
}

/** So long a download must stand still to be taken as finished. */
const STILL_MS = 2000;

/** The size of each download when it was looked at last, and since when it is that. */
const seen = new Map();
