// A person at the bench: types, reads, errs, mends, imports, keeps, reloads, reopens. In each engine, from disk, watched for
// complaints and requests all the while. What must be shown comes from the core for Node, asked beside the page.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { after, before, describe, test } from "node:test";

import { waitForFile } from "./downloads.mjs";
import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");
const REPLAY = new URL("../../target/replay.jsonl", import.meta.url);

/** A certificate as a laboratory in a country of decimal commas might send it. */
const CERTIFICATE = `Kalibrierschein;AR-2026-014
Datum;2026-09-30

Wellenlänge (nm);Empfindlichkeit (A/W);U (k=2) (%)
1310;0,912;1,1
1490;0,965;1,2
1550;0,981;1,1
15x0;0,970;1,1
1625;0,760;2,4
`;

const figure = (question, bench) => door.ask(question, bench).answer.shown.headline.figure;

for (const engine of ENGINES) {
    describe(`a person in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
            await person.openPage();
        });
        after(() => person?.close());

        const headline = () => person.read(".headline-figure");
        const headlineBecomes = (wanted) =>
            person.until(`the headline is ${wanted}`, (text) => document.querySelector(".headline-figure")?.innerText === text, wanted);
        const fault = (pointer) => person.field(pointer).then((field) => person.run((input) => document.getElementById(`${input.id}-fault`).innerText, field));
        const press = (text) => person.run((wanted) => [...document.querySelectorAll("button")].find((one) => one.innerText === wanted && !one.closest("[hidden]")).click(), text);

        test("finds the demonstration bench, named as invented, with its answer", async () => {
            assert.match(await person.read("#demo"), /invented observatory Ansa Ridge/);
            assert.equal(await headline(), figure("sensitivity", door.demo()));
            assert.match(await person.read("#cautions"), /never look into a fibre/i);
        });

        test("walks from the first field to the answer by keyboard alone", async () => {
            await person.run(() => document.forms.bench.elements.namedItem("/source/wavelength_nm").focus());
            await person.press("Tab");
            assert.equal(await person.run(() => document.activeElement.name), "/source/linewidth_nm");
            await person.until("the hint is that of the field", () => document.getElementById("hint").innerText.includes("laser"));
            await person.run(() => document.querySelector('input[name="question"]:checked').focus());
            await person.press("ArrowRight");
            await person.until("the other question is asked", () => document.querySelector(".headline").innerText.includes("the power of the light"));
            await person.press("ArrowLeft");
            await headlineBecomes(figure("sensitivity", door.demo()));
        });

        test("types, and the answer follows each keystroke", async () => {
            await person.fill("/detector/avalanche/gain", "12");
            const bench = door.demo();
            bench.detector.avalanche.gain = 12;
            await headlineBecomes(figure("sensitivity", bench));
        });

        test("breaks a field and is told there what may stand in it; the last answer stays", async () => {
            const before = await headline();
            await person.fill("/detector/avalanche/gain", "0.5");
            await person.until("the answer is dimmed", () => document.querySelector("#answer.stale"));
            assert.equal(await fault("/detector/avalanche/gain"), "The gain must lie between 1 and 1000000; “0.5” was given.");
            assert.equal(await headline(), before);
            assert.equal(await person.value("/detector/avalanche/gain"), "0.5", "what was typed stays");
            const said = await person.run((input) => {
                const ids = input.getAttribute("aria-describedby").split(" ");
                return [input.getAttribute("aria-invalid"), ids.map((id) => document.getElementById(id).innerText).join(" ")];
            }, await person.field("/detector/avalanche/gain"));
            assert.equal(said[0], "true");
            assert.match(said[1], /must lie between/);
            assert.match(await person.read("#state-line"), /last good answer.*Detector: gain/s);
        });

        test("breaks another and sees both at once, mends both, and has an answer again", async () => {
            await person.fill("/source/wavelength_nm", "1550 mn");
            assert.match(await fault("/source/wavelength_nm"), /“mn” is not a unit that can stand here/);
            assert.match(await fault("/detector/avalanche/gain"), /must lie between/);
            await person.fill("/source/wavelength_nm", "193.1 THz");
            await person.fill("/detector/avalanche/gain", "8");
            await person.until("the answer is not dimmed", () => !document.querySelector("#answer.stale"));
            assert.equal(await fault("/source/wavelength_nm"), "");
            const said = await person.run((input) => document.getElementById(`${input.id}-understood`).innerText, await person.field("/source/wavelength_nm"));
            assert.match(said, /193\.1000 THz = 1552\.52/);
            await person.fill("/source/wavelength_nm", "1551,7 nm");
            await headlineBecomes(figure("sensitivity", door.demo()));
        });

        test("is told why there is no such power", async () => {
            await person.fill("/source/rin_db_per_hz", "-105");
            await headlineBecomes("No such power");
            assert.match(await person.read(".headline"), /intensity noise grows with the light/);
            await person.fill("/source/rin_db_per_hz", "-140 dB/Hz");
            await headlineBecomes(figure("sensitivity", door.demo()));
        });

        test("asks the other question, in W and with a comma", async () => {
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
            await person.fill("/meter/reading_dbm", "1,58 µW");
            const bench = door.demo();
            bench.meter.reading_dbm = 10 * Math.log10(1.58e-3);
            await headlineBecomes(figure("reading", bench));
            const said = await person.run((input) => document.getElementById(`${input.id}-understood`).innerText, await person.field("/meter/reading_dbm"));
            assert.equal(said, "1.580 µW = −28.013 dBm");
        });

        test("imports a certificate from a file, and sees how it was read", async () => {
            await person.giveFile("#meter-certificate-points-file", "Schein.csv", CERTIFICATE);
            await person.until("the file is in the field", () => document.forms.bench.elements.namedItem("/meter/certificate/points").value.includes("AR-2026-014"));
            const read = await person.read('[data-table="/meter/certificate/points"] .read-as');
            assert.match(read, /4 rows/);
            assert.match(read, /15x0/, "the bad row is named");
            assert.match(read, /Line 8/, "by its line");
            const chosen = await person.run(() => [...document.querySelectorAll('[data-table="/meter/certificate/points"] .read-as select')].map((one) => one.value));
            assert.deepEqual(chosen.slice(0, 2), ["semicolon", "comma"]);
            assert.ok(chosen.includes("expanded") && chosen.includes("A/W"), chosen.join());
            const { value } = door.read_certificate(CERTIFICATE);
            const bench = door.demo();
            bench.meter.reading_dbm = 10 * Math.log10(1.58e-3);
            bench.meter.certificate = { form: value.form, coverage_factor: value.coverage_factor, points: value.points };
            await headlineBecomes(figure("reading", bench));
        });

        test("changes what was recognised, and takes it back", async () => {
            const before = await person.read(".headline");
            await person.run(() => {
                const select = document.querySelector('[data-choice="role-2"]');
                select.value = "ignored";
                select.dispatchEvent(new Event("change", { bubbles: true }));
            });
            await person.until("the certificate's is not in it", () => document.getElementById("answer").innerText.includes("state no uncertainty"));
            assert.ok(!(await person.run(() => [...document.querySelectorAll(".budget th")].some((one) => one.innerText === "the certificate"))));
            await press("Recognise it anew");
            await person.until("the uncertainty is back", (text) => document.querySelector(".headline").innerText === text, before);
        });

        test("is told how far the certificate reaches", async () => {
            await person.fill("/source/wavelength_nm", "1650 nm");
            await person.until("the answer is dimmed", () => document.querySelector("#answer.stale"));
            assert.match(await fault("/source/wavelength_nm"), /reaches from 1310 nm to 1625 nm; 1650 nm lies outside/);
            await person.fill("/source/wavelength_nm", "1600 nm");
            await person.until("the answer is not dimmed", () => !document.querySelector("#answer.stale"));
        });

        test("drops a file on the field", async () => {
            await person.dropFile("#meter-certificate-points", "other.csv", CERTIFICATE.replace("0,760", "0,770"));
            await person.until("the file is in the field", () => document.forms.bench.elements.namedItem("/meter/certificate/points").value.includes("0,770"));
        });

        test("keeps the answer, reloads, and finds all as it was", async () => {
            const before = await headline();
            await press("Keep this answer");
            await person.until("it is kept", () => document.querySelectorAll(".kept li").length === 1);
            await person.fill("/meter/set_wavelength_nm", "1490 nm");
            await person.until("the headline changed", (text) => document.querySelector(".headline-figure").innerText !== text, before);
            const changed = await headline();
            await person.reload();
            await headlineBecomes(changed);
            assert.equal(await person.value("/meter/set_wavelength_nm"), "1490 nm");
            assert.match(await person.value("/meter/certificate/points"), /0,770/);
            assert.match(await person.read(".kept"), new RegExp(before.replace("−", "\\−")));
            await press("Reopen");
            await headlineBecomes(before);
            await press("Undo");
            await headlineBecomes(changed);
            await press("Redo");
            await headlineBecomes(before);
        });

        test("compares two answers, removes one, and puts it back", async () => {
            await person.fill("/meter/reading_dbm", "-20 dBm");
            await press("Keep this answer");
            await person.until("two are kept", () => document.querySelectorAll(".kept li").length === 2);
            await person.run(() => document.querySelectorAll(".kept input[type=checkbox]").forEach((box) => document.body.contains(box) && box.click()));
            await person.run(() => document.querySelectorAll(".kept input[type=checkbox]:not(:checked)").forEach((box) => document.body.contains(box) && box.click()));
            const table = await person.until("the comparison stands", () => document.querySelector(".compared")?.innerText);
            assert.match(table, /Meter: reading/);
            await press("Remove");
            await person.until("one is left", () => document.querySelectorAll(".kept li").length === 1);
            await press("Put it back");
            await person.until("both are there", () => document.querySelectorAll(".kept li").length === 2);
        });

        test("saves the bench as a file that the core reads, starts empty, and opens it again", async () => {
            const before = await headline();
            await person.run(() => document.getElementById("bench-save").click());
            const file = await waitForFile(person.scratch, /\.bench\.json$/);
            const { value, faults } = door.read_bench(readFileSync(file, "utf8"));
            assert.equal(faults, undefined);
            assert.equal(figure("reading", value), before);
            await person.run(() => document.getElementById("bench-clear").click());
            await person.until("the bench is empty", () => document.forms.bench.elements.namedItem("/meter/reading_dbm").value === "");
            assert.match(await person.read("#state-line"), /Meter/);
            await person.giveFile("#bench-file", "opened.bench.json", readFileSync(file, "utf8"));
            await headlineBecomes(before);
        });

        test("opens a file that is none, and is told so", async () => {
            const before = await headline();
            await person.giveFile("#bench-file", "holiday.json", '{ "schema": "leastlight.bench/1", "sourse": {} }');
            await person.until("it is said", () => document.getElementById("summary").innerText.includes("sourse"));
            assert.equal(await headline(), before);
            await person.fill("/surroundings/temperature_c", "22 °C");
            assert.equal(await person.run(() => document.getElementById("summary").hidden), true, "it is not said for ever");
        });

        test("reads a curve with the arrow keys", async () => {
            await person.until("the chart is drawn", () => document.querySelector("svg.chart"));
            await person.run(() => document.querySelector("svg.chart").focus());
            await person.press("Home");
            const first = await person.read(".readout");
            await person.press("ArrowRight");
            await person.press("ArrowRight");
            const third = await person.read(".readout");
            assert.match(first, /Wavelength of the light .*nm, Add to the reading .*dB/);
            assert.notEqual(first, third);
            await person.press("End");
            assert.notEqual(await person.read(".readout"), third);
        });

        test("undoes with the keys, outside of a field", async () => {
            const before = await person.value("/meter/reading_dbm");
            await person.fill("/meter/reading_dbm", "-33.3");
            await person.run(() => document.getElementById("undo").focus());
            await person.press("Control+z");
            await person.until("the old text is back", (text) => document.forms.bench.elements.namedItem("/meter/reading_dbm").value === text, before);
            await person.press("Control+y");
            await person.until("the new text is back", () => document.forms.bench.elements.namedItem("/meter/reading_dbm").value === "-33.3");
        });

        test("copies a figure with its unit and hears of it", async () => {
            await person.click(await person.find(".fact .copy"));
            await person.until("it is said", () => /^Copied .+ [µnm]?W$/.test(document.getElementById("said").innerText));
        });

        test("sees figures with a comma where that is set", async () => {
            const point = await headline();
            await person.run(() => {
                const select = document.getElementById("decimal-mark");
                select.value = "comma";
                select.dispatchEvent(new Event("change", { bubbles: true }));
            });
            await headlineBecomes(point.replace(".", ","));
            await person.run(() => {
                const select = document.getElementById("decimal-mark");
                select.value = "auto";
                select.dispatchEvent(new Event("change", { bubbles: true }));
            });
        });

        test("scrolls its areas and not itself, on a laptop", async () => {
            await person.resize(1366, 768);
            assert.equal(await person.run(() => document.documentElement.scrollHeight - document.documentElement.clientHeight), 0);
        });

        test("finds no barrier, on either question, on a laptop and on a phone", async () => {
            for (const [width, height] of [[1366, 768], [390, 844]]) {
                await person.resize(width, height);
                for (const question of ["sensitivity", "reading"]) {
                    await person.run((name) => document.querySelector(`input[name="question"][value="${name}"]`).click(), question);
                    await person.photograph(`${question}-${width}`);
                    assert.deepEqual(await person.barriers(), [], `${question} at ${width}`);
                }
            }
        });

        test("reads it on the narrowest phone without scrolling sideways", async () => {
            const [inside] = await person.resize(320, 640);
            // Not every window gets so narrow; then its own width counts.
            const over = await person.run(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
            assert.ok(inside <= 500, `the window stayed ${inside} px wide`);
            assert.equal(over, 0);
            await person.resize(1366, 768);
        });

        test("puts the native core's questions to the page and has the same bits back", async () => {
            const lines = readFileSync(REPLAY, "utf8").trim().split("\n");
            assert.ok(lines.length > 60);
            const wrong = await person.run((calls) => {
                const same = (a, b) =>
                    typeof a === "object" && a !== null && typeof b === "object" && b !== null
                        ? Object.keys(a).length === Object.keys(b).length && Object.keys(a).every((key) => same(a[key], b[key]))
                        : Object.is(a, b);
                return calls.filter((line) => {
                    const { question, bench, options, result } = JSON.parse(line);
                    return !same(window.leastlight.ask(question, bench, options), result);
                });
            }, lines);
            assert.deepEqual(wrong, []);
        });

        test("sees a failing core replaced, and loses nothing", async () => {
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
            const before = await headline();
            // One keystroke meets a core that traps; the next meets the fresh one.
            await person.run(() => {
                globalThis.wasm_bindgen.follow = () => {
                    throw new WebAssembly.RuntimeError("planted");
                };
                const input = document.forms.bench.elements.namedItem("/meter/reading_dbm");
                input.value = "-21";
                input.dispatchEvent(new Event("input", { bubbles: true }));
            });
            assert.match(await person.read("#banner"), /failed by a mistake of this program \((RuntimeError: )?planted\)\. It was started afresh; nothing you typed is lost/);
            assert.equal(await headline(), before, "the last good answer stays");
            assert.equal(await person.value("/meter/reading_dbm"), "-21");
            await person.fill("/meter/reading_dbm", "-21.5 dBm");
            await person.until("it answers again", () => document.getElementById("banner").hidden && !document.querySelector("#answer.stale"));
            assert.notEqual(await headline(), before);
        });

        test("finds a store that somebody else wrote into harmless", async () => {
            for (const odd of ["{", '{"texts":3}', '{"texts":{"/path/loss_db":3},"history":{"past":[],"future":[]}}', "null"]) {
                await person.run((text) => {
                    for (const key of ["state", "notebook"]) localStorage.setItem(`leastlight/1/${key}`, text);
                }, odd);
                await person.reload();
                await person.until("the demonstration bench is back", () => !document.getElementById("demo").hidden && document.querySelector(".headline-figure"));
            }
        });

        test("and all the while there was no complaint and no request", async () => {
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        });
    });
}
