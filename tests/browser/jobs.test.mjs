// A person with more than a table of numbers: a broad source's spectrum, a digital calibration certificate, and a meter to be
// calibrated against another. In each engine, from disk. What must be shown comes from the core for Node, asked beside the page.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { after, before, describe, test } from "node:test";

import { waitForFile } from "./downloads.mjs";
import { ENGINES, start } from "./engines.mjs";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");

/** A broad source as an analyser writes it: a level at each wavelength. */
const levels = (from, to) => Array.from({ length: 41 }, (_, i) => from + ((to - from) * i) / 40).map((nm) => `${nm}\t${(-20 - ((nm - 1545) / 12) ** 2).toFixed(2)}`).join("\n");
const spectrum = (unit, from = 1500, to = 1590) => `Wavelength (nm)\tLevel${unit}\n${levels(from, to)}\n`;

/** Two wavelengths, two blocks each, with a drift; the meter under test shows about half a decibel too little. */
const READINGS = `nm;meter;dBm
1310;A;-20.000
1310;B;-20.511
1310;B;-20.516
1310;A;-20.012
1310;A;-20.015
1310;B;-20.529
1310;B;-20.531
1310;A;-20.028
1550;A;-18.000
1550;B;-18.402
1550;B;-18.405
1550;A;-18.011
1550;A;-18.014
1550;B;-18.418
1550;B;-18.420
1550;A;-18.026
`;

const figure = (question, bench) => door.ask(question, bench).answer.shown.headline.figure;

for (const engine of ENGINES) {
    describe(`a person with a spectrum, a certificate and a comparison in ${engine}`, () => {
        let person;
        before(async () => {
            person = await start(engine);
            await person.openPage();
            await person.run(() => document.querySelector('input[name="question"][value="reading"]').click());
        });
        after(() => person?.close());

        const headlineBecomes = (wanted) =>
            person.until(`the headline is ${wanted}`, (text) => !document.querySelector("#answer.stale") && document.querySelector(".headline-figure")?.innerText === text, wanted);
        const fault = (name) => person.run((wanted) => document.getElementById(`${document.getElementsByName(wanted)[0].id}-fault`).innerText, name);
        const press = (text) => person.run((wanted) => [...document.querySelectorAll("button")].find((one) => one.innerText === wanted && one.checkVisibility()).click(), text);
        /** Text comes into a box at once, as pasted text does. */
        const paste = (name, text) =>
            person.run((wanted, content) => {
                const box = document.getElementsByName(wanted)[0];
                box.focus();
                box.value = content;
                box.dispatchEvent(new Event("input", { bubbles: true }));
            }, name, text);
        const choose = (selector, value) =>
            person.run((wanted, to) => {
                const select = document.querySelector(wanted);
                select.value = to;
                select.dispatchEvent(new Event("change", { bubbles: true }));
                select.dispatchEvent(new Event("input", { bubbles: true }));
            }, selector, value);
        const ask = (name) => person.run((wanted) => document.querySelector(`input[name="question"][value="${wanted}"]`).click(), name);
        const answered = () => person.until("the answer is not dimmed", () => !document.querySelector("#answer.stale"));

        test("pastes a spectrum: the answer is averaged over it, and it is drawn over the responsivity", async () => {
            await paste("/source/spectrum/points", spectrum(" (dBm)"));
            const bench = door.demo();
            const { value } = door.read_spectrum(spectrum(" (dBm)"));
            bench.source.spectrum = { unit: value.unit, points: value.points };
            await headlineBecomes(figure("reading", bench));
            assert.match(await person.read("#answer"), /Change by the width of the light/);
            assert.match(await person.read("#answer"), /averaged over the tabulated spectrum/);
            const chart = await person.until("the drawing is there", () => {
                const found = [...document.querySelectorAll(".chart-figure")].find((one) => one.innerText.includes("The light over the responsivity"));
                return found?.querySelectorAll("svg .line[d^='M']").length ? found.querySelector("svg").textContent : null;
            });
            assert.match(chart, /responsivity.*light.*mean wavelength/s);
        });

        test("is asked whether values without a unit are linear, at the box", async () => {
            await paste("/source/spectrum/points", spectrum(""));
            await person.until("the answer is dimmed", () => document.querySelector("#answer.stale"));
            assert.match(await fault("/source/spectrum/points"), /names no unit.*choose the unit of the column/s);
            await choose('[data-table="/source/spectrum/points"] [data-choice="unit-1"]', "dBm");
            await answered();
            assert.equal(await fault("/source/spectrum/points"), "");
        });

        test("is told which share of the light lies outside of the certificate", async () => {
            const text = spectrum(" (dBm/nm)", 1560, 1660);
            await paste("/source/spectrum/points", text);
            await person.until("the answer is dimmed", () => document.querySelector("#answer.stale"));
            const bench = door.demo();
            const { value } = door.read_spectrum(text);
            bench.source.spectrum = { unit: value.unit, points: value.points };
            const { faults } = door.ask("reading", bench);
            assert.match(faults[0].sentence, /% of its light lies outside/);
            assert.equal(await fault("/source/spectrum/points"), faults[0].sentence);
            await paste("/source/spectrum/points", "");
            await headlineBecomes(figure("reading", door.demo()));
        });

        test("is asked for what a digital certificate needs, and saves one", async () => {
            await press("Save as DCC…");
            await person.until("it is asked", () => document.getElementById("dcc-save").open);
            assert.deepEqual(await person.barriers(), []);
            await press("Save the file");
            assert.match(await fault("dcc/unique_identifier"), /Needed for a digital certificate: the number of the certificate/);
            const given = {
                unique_identifier: "AR-2026-017", language: "en", begin_date: "2026-11-29", end_date: "30.11.2026", location: "laboratory",
                responsible_person: "R. Ansa", "item/name": "power meter <west>", "item/identification": "17", "laboratory/name": "Ansa Ridge workshop",
                "laboratory/country": "IT", "customer/name": "West dome", "customer/country": "IT", method: "Comparison", coverage_probability: "95,45 %",
            };
            for (const [key, text] of Object.entries(given)) await person.run((name, value) => (document.getElementsByName(name)[0].value = value), `dcc/${key}`, text);
            await press("Save the file");
            assert.match(await fault("dcc/end_date"), /written as 2026-11-30; “30\.11\.2026” was given/);
            assert.equal(await fault("dcc/unique_identifier"), "");
            await person.run(() => (document.getElementsByName("dcc/end_date")[0].value = "2026-11-30"));
            await press("Save the file");
            const file = readFileSync(await waitForFile(person.scratch, /017\.dcc\.xml$/), "utf8");
            const { value } = door.read_dcc(file);
            assert.equal(value.identifier, "AR-2026-017");
            assert.equal(value.item, "power meter <west>");
            assert.equal(value.certificate.coverage_factor, 2);
            person.dcc = file;
        });

        test("drops it on the box, confirms what its columns mean, and has the same certificate", async () => {
            const before = await person.read(".headline-figure");
            await paste("/meter/certificate/points", "");
            await person.fill("/meter/certificate/coverage_factor", "");
            await person.until("the answer waits", () => document.querySelector("#answer.stale"));
            const signed = person.dcc.replace("</dcc:digitalCalibrationCertificate>", '<ds:Signature xmlns:ds="http://www.w3.org/2000/09/xmldsig#"/></dcc:digitalCalibrationCertificate>');
            await person.dropFile("#meter-certificate-points", "017.xml", signed);
            await person.until("it is asked", () => document.getElementById("dcc-open").open);
            const found = await person.read("#dcc-found");
            assert.match(found, /AR-2026-017/);
            assert.match(found, /Signature present, not verified/);
            assert.match(found, /850/);
            assert.deepEqual(await person.barriers(), []);
            // Values that are no responsivity are refused with a sentence, and the choice can be mended.
            await choose("#dcc-form-of-value", "deviation");
            assert.match(await person.read("#dcc-found"), /Values in A\/W are a responsivity/);
            assert.equal(await person.run(() => document.getElementById("dcc-confirm").disabled), true);
            await choose("#dcc-form-of-value", "responsivity");
            await press("Use this certificate");
            await headlineBecomes(before);
            assert.match(await person.value("/meter/certificate/coverage_factor"), /^2$/);
            assert.match(await person.run(() => document.getElementById("undo").title), /Certificate AR-2026-017 from 017\.xml/);
            await press("Undo");
            await person.until("the box is empty again", () => document.forms.bench.elements.namedItem("/meter/certificate/points").value === "");
            await press("Redo");
            await headlineBecomes(before);
        });

        test("pastes XML that is no certificate, and is told so; the box stays as it was", async () => {
            const before = await person.value("/meter/certificate/points");
            await paste("/meter/certificate/points", "<page><b/></page>");
            await person.until("it is said", () => document.getElementById("dcc-open").open);
            assert.match(await person.read("#dcc-found"), /begins with page/);
            await press("Cancel");
            assert.equal(await person.value("/meter/certificate/points"), before);
        });

        test("finds the comparison from the certificate, and is told all that it needs", async () => {
            await press("Calibrate against another meter…");
            await person.until("its form is there", () => document.getElementById("transfer").checkVisibility());
            assert.equal(await person.run(() => document.querySelector('input[name="question"]:checked').value), "transfer");
            const line = await person.read("#state-line");
            for (const part of ["Certificate of the reference", "Readings of both in turn", "Date of the readings", "Number of its certificate"]) assert.ok(line.includes(part), line);
        });

        test("gives the reference, the readings, and which is which; the answer is that of the core", async () => {
            await press("Take the certificate on the bench");
            await paste("transfer/reference_certificate", "AR-2026-017");
            await person.giveFile("#transfer-readings-file", "readings.csv", READINGS);
            await person.until("the file is in the box", () => document.getElementsByName("transfer/readings")[0].value.includes("1550;B"));
            await paste("transfer/date", "2026-11-30");
            assert.match(await fault("transfer/reference"), /which of "A" and "B" is the reference/);
            await choose("#transfer-reference", "A");
            await choose("#transfer-add", "0");
            await paste("transfer/contributions/0/standard_percent", "0,4 %");
            const { form, coverage_factor, points } = door.read_dcc(person.dcc).value.certificate;
            const bench = { meter: { certificate: { form, coverage_factor, points } } };
            const contributions = [{ name: await person.run(() => document.getElementsByName("transfer/contributions/0/name")[0].value), standard_percent: 0.4 }];
            const { value } = door.transfer_calibration(READINGS, bench, { reference: "A", date: "2026-11-30", reference_certificate: "AR-2026-017", contributions });
            await headlineBecomes(value.shown.headline.figure);
            assert.match(await person.read("[data-table='transfer/readings'] .read-as"), /16 rows/);
            assert.match(await person.read("#answer"), /The comparison, wavelength by wavelength/);
            assert.match(await person.read("#cautions"), /never look into a fibre/i);
            person.transfer = value;
        });

        test("finds all of it again after a reload, and can take steps back", async () => {
            await person.reload();
            await headlineBecomes(person.transfer.shown.headline.figure);
            assert.match(await person.run(() => document.getElementsByName("transfer/readings")[0].value), /1310;A;-20\.000/);
            assert.equal(await person.run(() => document.getElementsByName("transfer/contributions/0/standard_percent")[0].value), "0,4 %");
            await press("Remove");
            await person.until("it is gone", () => document.getElementsByName("transfer/contributions/0/name").length === 0);
            await press("Undo");
            await headlineBecomes(person.transfer.shown.headline.figure);
        });

        test("saves the new certificate as CSV and as a digital certificate, with its history", async () => {
            await press("Save CSV");
            const csv = readFileSync(await waitForFile(person.scratch, /\.certificate\.csv$/), "utf8");
            assert.equal(csv, person.transfer.csv);
            assert.deepEqual(door.read_certificate(csv).value.points, person.transfer.certificate.points);
            // The bench has a button of the same name for its own certificate.
            await person.run(() => [...document.querySelectorAll("#answer [data-deed]")].find((one) => one.innerText === "Save as DCC…").click());
            await person.run(() => {
                document.getElementsByName("dcc/unique_identifier")[0].value = "AR-2026-018";
                document.getElementsByName("dcc/item/name")[0].value = "meter B";
            });
            assert.equal(await person.run(() => document.getElementsByName("dcc/coverage_probability")[0].value), "0.95");
            await press("Save the file");
            const xml = readFileSync(await waitForFile(person.scratch, /018\.dcc\.xml$/), "utf8");
            assert.match(xml, /Transfer calibration by comparison, 2026-11-30/);
            assert.match(xml, /AR-2026-017/);
            const { value } = door.read_dcc(xml, { form: "correction_factor" });
            assert.deepEqual(value.certificate.points.map((point) => point.value), person.transfer.certificate.points.map((point) => point.value));
        });

        test("puts it on the bench: the reading is corrected by it", async () => {
            await press("Put on the bench");
            await person.until("it is on the bench", () => document.forms.bench.elements.namedItem("/meter/certificate/points").value.includes("Correction factor"));
            await headlineBecomes(person.transfer.shown.headline.figure);
            await press("Keep this answer");
            await person.until("it is kept", () => document.querySelectorAll(".kept li").length === 1);
            await ask("reading");
            // Between its wavelengths a correction factor needs the meter's typical curve.
            const curve = door.demo().meter.certificate.points.map(({ wavelength_nm, value }) => ({ wavelength_nm, a_per_w: value }));
            await paste("/meter/typical_curve/points", `Wavelength (nm)\tR (A/W)\n${curve.map(({ wavelength_nm, a_per_w }) => `${wavelength_nm}\t${a_per_w}`).join("\n")}\n`);
            await person.fill("/source/wavelength_nm", "1400 nm");
            await person.fill("/meter/set_wavelength_nm", "1310 nm");
            await answered();
            const bench = door.demo();
            bench.source.wavelength_nm = 1400;
            bench.meter.set_wavelength_nm = 1310;
            bench.meter.typical_curve = curve;
            bench.meter.certificate = { form: "correction_factor", coverage_factor: person.transfer.certificate.coverage_factor, points: person.transfer.certificate.points };
            await headlineBecomes(figure("reading", bench));
            await press("Reopen");
            await headlineBecomes(person.transfer.shown.headline.figure);
            assert.equal(await person.run(() => document.getElementById("transfer").checkVisibility()), true);
        });

        test("finds no barrier in the job, on a laptop and on a phone, and no sideways scrolling", async () => {
            for (const [width, height] of [[1366, 768], [390, 844]]) {
                await person.resize(width, height);
                await person.photograph(`transfer-${width}`);
                assert.deepEqual(await person.barriers(), [], `${width}`);
                assert.ok((await person.run(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)) <= 0);
            }
            await person.resize(1366, 768);
        });

        test("starts the bench empty and keeps the comparison's own texts", async () => {
            await person.run(() => document.getElementById("bench-clear").click());
            await person.until("the bench is empty", () => document.forms.bench.elements.namedItem("/meter/reading_dbm").value === "");
            await headlineBecomes(person.transfer.shown.headline.figure);
        });

        test("and all the while there was no complaint and no request", async () => {
            assert.deepEqual(await person.complaints(), []);
            assert.deepEqual(person.listener.heard, []);
        });
    });
}
