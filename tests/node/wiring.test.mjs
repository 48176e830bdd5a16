// Every number of the bench has an input in the page, and every input is read by the core.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { test } from "node:test";

import { HtmlValidate } from "html-validate";

const door = createRequire(import.meta.url)("../../dist/node/leastlight.js");
const page = readFileSync(new URL("../../www/index.html", import.meta.url), "utf8");
const names = [...page.matchAll(/<(input|select|textarea)\b[^>]*\sname="(\/[^"]*)"/g)].map(([, tag, name]) => ({ tag, name }));

test("each number has an input named by its pointer, and a hint", () => {
    const inputs = names.filter(({ tag }) => tag === "input").map(({ name }) => name);
    for (const { pointer, usual } of door.fields()) {
        assert.ok(inputs.includes(pointer), `${pointer} has no input`);
        assert.ok(usual.length > 3, `${pointer} says nothing of what is usual`);
    }
});

test("each input is a number of the bench or one of the few others", () => {
    const numbers = door.fields().map(({ pointer }) => pointer);
    const others = ["/title", "/meter/table_wavelengths_nm"];
    const left = names.filter(({ tag, name }) => tag === "input" && !numbers.includes(name) && !others.includes(name));
    assert.deepEqual(left, []);
});

test("each choice in the page is a word that the core knows", () => {
    for (const { name } of names.filter(({ tag }) => tag === "select")) {
        const [, list] = new RegExp(`name="${name}">(.*?)</select>`, "s").exec(page);
        const words = [...list.matchAll(/<option value="([^"]+)"/g)].map(([, word]) => word);
        assert.ok(words.length > 0, name);
        for (const word of words) {
            const { faults } = door.understand(nested(name, word), "auto");
            assert.deepEqual(faults.filter(({ pointer }) => pointer === name), [], `${name}: ${word}`);
        }
        assert.notDeepEqual(door.understand(nested(name, "no such word"), "auto").faults, [], `${name} takes anything`);
    }
});

test("each field that a question reads stands in the page", () => {
    for (const { name: question, fields } of door.questions()) {
        for (const field of fields) {
            assert.ok(names.some(({ name }) => name === field || name.startsWith(`${field}/`)), `${question}: ${field}`);
        }
    }
});

test("no name stands twice, and every label has its control", () => {
    assert.equal(new Set(names.map(({ name }) => name)).size, names.length);
    const ids = [...page.matchAll(/\sid="([^"]+)"/g)].map(([, id]) => id);
    for (const [, of] of page.matchAll(/<label for="([^"]+)"/g)) assert.ok(ids.includes(of), of);
});

test("the markup is valid", async () => {
    const report = await new HtmlValidate({ extends: ["html-validate:standard"], rules: { "no-inline-style": "error", "void-style": "off" } }).validateString(page);
    assert.deepEqual(report.results.flatMap(({ messages }) => messages.map(({ ruleId, message, line }) => `${line}: ${ruleId}: ${message}`)), []);
});

function nested(pointer, value) {
    return pointer.slice(1).split("/").reduceRight((inner, key) => ({ [key]: inner }), value);
}
