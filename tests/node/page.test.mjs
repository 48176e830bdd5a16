// The page's modules that touch no document: history, typed bench, notebook, figures, axes, labels.

import assert from "node:assert/strict";
import { describe, test } from "node:test";

import { percent } from "../../www/answer.js";
import { areaOf, choicesOf, ofAreas, takesPart, textsOf, typed } from "../../www/bench.js";
import { scaleOf } from "../../www/chart/axis.js";
import { bestPlace, overlap } from "../../www/chart/labels.js";
import { FACTOR, READINGS, REFERENCE, asked, ownerName } from "../../www/comparison.js";
import { USUAL, contributionsOf, isProposed, withContributions } from "../../www/contributions.js";
import { administrationOf, ownerName as administrationOwner } from "../../www/dcc-administration.js";
import { doubtsOf, instead, withDoubts } from "../../www/doubts/text.js";
import { csvOf, fileName } from "../../www/files.js";
import { worthSaying } from "../../www/fields.js";
import { closed, emptyHistory, recorded, redone, undone } from "../../www/history.js";
import { SCHEMA, claims, compared, fileText, joined, read, sound } from "../../www/notebook.js";
import { marked, readOff, spreadsheet } from "../../www/numbers.js";

const control = (name, kind = "number", when = [], groups = []) => ({ name, kind, when, groups });

describe("a typed bench", () => {
    const controls = [
        control("/path/loss_db", "number", [], ["/path"]),
        control("/detector/responsivity/kind", "choice", [], ["/detector"]),
        control("/detector/responsivity/a_per_w", "number", [["/detector/responsivity/kind", "value"]], ["/detector"]),
        control("/detector/responsivity/points", "table", [["/detector/responsivity/kind", "table"]], ["/detector"]),
    ];

    test("nests texts by their pointers and leaves them as typed", () => {
        const bench = typed(controls, { "/path/loss_db": "3,5 dB", "/detector/responsivity/kind": "value", "/detector/responsivity/a_per_w": "0.9" });
        assert.equal(bench.path.loss_db, "3,5 dB");
        assert.deepEqual(bench.detector.responsivity, { kind: "value", a_per_w: "0.9" });
    });

    test("leaves out an alternative that is not chosen, but not its text", () => {
        const texts = { "/detector/responsivity/kind": "table", "/detector/responsivity/a_per_w": "0.9", "/detector/responsivity/points": "1310\t0.9" };
        assert.equal(takesPart(controls[2], texts), false);
        assert.deepEqual(typed(controls, texts).detector.responsivity, { kind: "table", table: { text: "1310\t0.9" } });
    });

    test("has no part in which nothing is typed", () => {
        assert.equal(typed(controls, { "/path/loss_db": " " }).path, null);
    });

    test("carries how a table is to be read", () => {
        const name = "/detector/responsivity/points";
        const texts = { "/detector/responsivity/kind": "table", [name]: "1;2", [choicesOf(name)]: '{"delimiter":"semicolon"}' };
        assert.deepEqual(typed(controls, texts).detector.responsivity.table.choices, { delimiter: "semicolon" });
    });

    test("is filled from a bench and gives the bench back", () => {
        const write = { number: (_, value) => String(value), table: () => "", doubts: () => null };
        const texts = textsOf(controls, { path: { loss_db: 3.5 }, detector: { responsivity: { kind: "value", a_per_w: 0.9 } } }, write, {});
        assert.equal(texts["/path/loss_db"], "3.5");
        assert.equal(typed(controls, texts).detector.responsivity.a_per_w, "0.9");
    });
});

test("texts of the bench and of a job are told apart by their names", () => {
    for (const name of ["/path/loss_db", "/meter/certificate/points#choices", "detector-type"]) assert.equal(areaOf(name), "");
    assert.equal(areaOf("transfer/readings#choices"), "transfer");
    assert.deepEqual(ofAreas({ "/title": "a", "transfer/date": "b", "dcc/language": "c" }, (area) => area !== "dcc"), { "/title": "a", "transfer/date": "b" });
});

describe("undo", () => {
    const name = (changes) => Object.keys(changes).join();

    test("takes the keystrokes in one field as one step", () => {
        let history = emptyHistory();
        history = recorded(history, { a: "" }, { a: "1" }, name, "a");
        history = recorded(history, { a: "1" }, { a: "12" }, name, "a");
        assert.equal(history.past.length, 1);
        assert.deepEqual(undone(history, { a: "12" }).texts, { a: "" });
    });

    test("begins a new step when the field was left", () => {
        let history = closed(recorded(emptyHistory(), { a: "" }, { a: "1" }, name, "a"));
        history = recorded(history, { a: "1" }, { a: "12" }, name, "a");
        assert.equal(history.past.length, 2);
    });

    test("goes back and forth to the letter", () => {
        const history = recorded(emptyHistory(), { a: "1", b: "2" }, { a: "1", b: "3" }, name, null);
        const back = undone(history, { a: "1", b: "3" });
        assert.deepEqual(back.texts, { a: "1", b: "2" });
        assert.deepEqual(redone(back.history, back.texts).texts, { a: "1", b: "3" });
        assert.equal(undone(emptyHistory(), {}), null);
    });
});

describe("the notebook", () => {
    const entry = (id, when, loss, figure) => ({
        id, when, question: "sensitivity", asks: "?", title: "t", note: "", version: "1", texts: { "/path/loss_db": loss }, bench: {},
        answer: { shown: { headline: { figure, sentence: "" }, facts: [{ name: "Gain", figure: "8" }] }, curves: [] },
    });
    const [a, b] = [entry("a", "2026-01-01", "1 dB", "−30 dBm"), entry("b", "2026-01-02", "2 dB", "−31 dBm")];

    test("comes back from its own file", () => {
        assert.ok(claims(fileText([a], "1")));
        assert.deepEqual(read(fileText([a, b], "1")).kept, [a, b]);
    });

    test("says why a file is none", () => {
        assert.match(read("{").sentence, /not the text of a notebook/);
        assert.match(read('{"schema":"leastlight.notebook/9"}').sentence, /leastlight\.notebook\/9/);
        assert.match(read(JSON.stringify({ schema: SCHEMA, kept: [a, { id: 1 }] })).sentence, /1 of the 2 answers/);
        assert.equal(claims('{"schema":"leastlight.bench/1"}'), false);
    });

    test("passes over what is no answer", () => {
        assert.deepEqual(sound([a, null, 3, { ...b, texts: { "/path/loss_db": 3 } }]), [a]);
        assert.deepEqual(sound("notebook"), []);
    });

    test("takes the same answer once, newest first", () => {
        assert.deepEqual(joined([a], [b, a]).map(({ id }) => id), ["b", "a"]);
    });

    test("lays two answers side by side, with the inputs that differ", () => {
        const { facts, inputs } = compared(a, b);
        assert.deepEqual(facts[0], ["Answer", "−30 dBm", "−31 dBm"]);
        assert.deepEqual(inputs, [["/path/loss_db", "1 dB", "2 dB"]]);
    });
});

describe("figures", () => {
    test("change their decimal mark and nothing else", () => {
        assert.equal(marked("−27.03 dBm (IEC 60825-1, ED-13.)", "comma"), "−27,03 dBm (IEC 60825-1, ED-13.)");
        assert.equal(marked("1.5", "auto"), "1.5");
        assert.equal(spreadsheet(1.5, "comma"), "1,5");
    });

    test("are read off a chart with their sign and exponent", () => {
        assert.equal(readOff(-27.034, 4, "auto"), "−27.03");
        assert.equal(readOff(1.234e-12, 3, "auto"), "1.23 × 10⁻¹²");
        assert.equal(readOff(0, 3, "auto"), "0.00");
    });

    test("say a small share as small, not as none", () => {
        assert.equal(percent(0.61), "61.0 %");
        assert.equal(percent(1e-6), "< 0.1 %");
        assert.equal(percent(0), "0 %");
    });

    test("repeat what was typed only where that adds something", () => {
        assert.equal(worthSaying("1550 nm", "1550 nm"), "");
        assert.equal(worthSaying("1550", "1550 nm"), "");
        assert.equal(worthSaying("1,58 µW", "1.580 µW = −28.013 dBm"), "1.580 µW = −28.013 dBm");
    });

    test("a title makes a file name", () => {
        assert.equal(fileName("Ansa Ridge, west dome (Prüfung)"), "ansa-ridge-west-dome-prufung");
        assert.equal(fileName("…"), "untitled");
    });
});

describe("a table as CSV", () => {
    const table = { title: "Bias", columns: ["Temperature / °C", "Gain, left alone"], rows: [["−20", "1.5"], ["0", "–"], ["5", 'say "8"']] };

    test("is what a spreadsheet opens, with a plain minus and nothing for a dash", () => {
        assert.equal(csvOf(table, "auto"), 'Temperature / °C,"Gain, left alone"\r\n-20,1.5\r\n0,\r\n5,"say ""8"""\r\n');
    });

    test("parts its cells by semicolons where the comma is the decimal mark", () => {
        assert.equal(csvOf(table, "comma"), 'Temperature / °C;Gain, left alone\r\n-20;1,5\r\n0;\r\n5;"say ""8"""\r\n');
    });
});

describe("axes and labels", () => {
    const axis = (scale) => ({ label: "l", unit: "u", scale });

    test("a logarithmic axis names decades and thins them to the room", () => {
        const { ticks, place } = scaleOf(axis("log"), [1e-18, 1e-2], [280, 0], 8, "auto");
        const named = ticks.filter(({ power }) => power !== null);
        assert.ok(named.length >= 3 && named.length <= 9, `${named.length}`);
        assert.equal(place(1e-18), 280);
        assert.equal(place(1e-2), 0);
    });

    test("an axis has a length even for one value", () => {
        for (const scale of ["linear", "log"]) {
            const { low, high } = scaleOf(axis(scale), [5], [0, 100], 5, "auto");
            assert.ok(low < 5 && high > 5);
        }
    });

    test("the name of a mark avoids the other names and stays in the frame", () => {
        const frame = { x: 0, y: 0, width: 200, height: 100 };
        const label = { width: 50, height: 16 };
        const taken = [{ x: 0, y: 0, ...label }];
        const box = bestPlace([{ x: 0, y: 0 }, { x: 190, y: 90 }], label, frame, taken, []);
        assert.equal(overlap(box, taken[0]), false);
        assert.ok(box.x + box.width <= 200 && box.y + box.height <= 100);
    });
});

describe("a calibration by comparison", () => {
    const texts = {
        [REFERENCE]: "1550\t0.98\t1.1", [choicesOf(REFERENCE)]: '{"delimiter":"tab"}', [FACTOR]: "2", [READINGS]: "1550;A;-20",
        "transfer/date": "2026-11-30", "transfer/reference": "A", "/path/loss_db": "3",
    };

    test("asks of its own texts, and of nothing on the bench", () => {
        const { readings, bench, choices } = asked(withContributions(texts, [{ name: "connector", standard_percent: "0,4", degrees_of_freedom: "" }]));
        assert.equal(readings, "1550;A;-20");
        assert.deepEqual(bench, { meter: { certificate: { table: { text: "1550\t0.98\t1.1", choices: { delimiter: "tab" } }, coverage_factor: "2" } } });
        assert.equal(choices.reference, "A");
        assert.deepEqual(choices.contributions, [{ name: "connector", standard_percent: "0,4", degrees_of_freedom: "" }]);
        assert.equal(asked({}).bench.meter, null);
    });

    test("knows the control that owns each fault", () => {
        assert.equal(ownerName("/choices/date"), "transfer/date");
        assert.equal(ownerName("/choices/contributions/1/standard_percent"), "transfer/contributions/1/standard_percent");
        assert.equal(ownerName("/choices/contributions/1"), "transfer/contributions/1/name");
        assert.equal(ownerName("/choices/table/columns/0"), READINGS);
        assert.equal(ownerName("/readings"), READINGS);
        assert.equal(ownerName("/meter/certificate/coverage_factor"), FACTOR);
        assert.equal(ownerName("/meter/certificate/points/3"), REFERENCE);
        assert.equal(ownerName("/meter"), REFERENCE);
    });

    test("keeps a list of contributions in one text, and finds a strange one harmless", () => {
        const list = [{ name: USUAL[0][0], standard_percent: USUAL[0][1], degrees_of_freedom: "" }];
        assert.deepEqual(contributionsOf(withContributions({}, list)), list);
        assert.ok(isProposed(list[0]));
        assert.equal(isProposed({ ...list[0], standard_percent: "0.05" }), false);
        for (const odd of ["{", "3", "null", '[null,{"name":4}]']) assert.ok(contributionsOf({ "transfer/contributions": odd }).every(({ name }) => name === ""));
    });
});

describe("what a digital certificate says beside its numbers", () => {
    test("is nested by its names, without what is blank", () => {
        const texts = { "dcc/language": "en", "dcc/item/name": " power meter ", "dcc/item/model": " ", "/title": "t" };
        assert.deepEqual(administrationOf(texts, []), { language: "en", item: { name: "power meter" } });
        assert.deepEqual(administrationOf({}, ["a"]), { history: ["a"] });
    });

    test("has each fault at its field, or at none", () => {
        const names = ["dcc/language", "dcc/item/name", "dcc/item/model"];
        assert.equal(administrationOwner("/administration/item/model", names), "dcc/item/model");
        assert.equal(administrationOwner("/administration/item", names), "dcc/item/name");
        assert.equal(administrationOwner("/meter/certificate/points", names), null);
    });
});

test("doubts of somebody else's making do no harm", () => {
    const none = doubtsOf({});
    for (const text of ["{", "7", "null", '"x"', '{"inputs":3}', '{"inputs":[null]}', '{"inputs":[],"correlations":[1]}']) {
        assert.deepEqual(doubtsOf({ "/uncertainty": text }), none, text);
    }
    const kept = { ...none, inputs: [{ pointer: "/path/loss_db", half_width: "0.1 dB" }] };
    assert.deepEqual(doubtsOf(withDoubts({}, kept)), kept);
});

test("a fitted device's doubts stand in the place of older ones, and correlations keep their partners", () => {
    const doubt = (pointer, amount) => ({ pointer, standard: amount });
    const before = { ...doubtsOf({}), inputs: [doubt("/a", "1"), doubt("/b", "2"), doubt("/c", "3")], correlations: [[0, 1, "0.5"], [0, 2, "0.3"]] };
    const after = instead(before, [doubt("/b", "7"), doubt("/d", "8")], [[0, 1, -0.4]]);
    assert.deepEqual(after.inputs, [doubt("/a", "1"), doubt("/c", "3"), doubt("/b", "7"), doubt("/d", "8")]);
    assert.deepEqual(after.correlations, [[0, 1, "0.3"], [2, 3, "-0.4"]]);
});
