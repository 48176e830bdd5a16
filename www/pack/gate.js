// Reads the packed page as the browser would and names whatever could reach out of it. The policy inside the
// page stops every request a document can make but a few; those few are looked for here, as text.
//
//     node www/pack/gate.js PAGE.html FOLDER…     (folders of this machine whose names must not be inside)

import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";

/** Names of vocabularies: they look like addresses, and nothing is ever fetched from them. */
const VOCABULARY = String.raw`\bhttp://www\.w3\.org/(?:2000/svg|1999/xhtml|1999/xlink|2000/xmlns/|2000/09/xmldsig#|XML/1998/namespace|1998/Math/MathML)`;
const VOCABULARIES = new RegExp(String.raw`${VOCABULARY}(?![\w./-])`, "g");
/** Inside the core one text stands right behind the other. */
const VOCABULARIES_IN_CORE = new RegExp(VOCABULARY, "g");

/** Slashes may be missing from an address, but then a quotation mark or an attribute must hold it: a minifier's `a?ws:b` is none. */
const ADDRESS = /\b(?:https?|wss?|ftp):\/+[\w[]|["'`=]\s*(?:https?|wss?|ftp):[\w[]|["'`(=]\s*\/\/[a-z0-9[]/gi;

/** What must stand nowhere: in markup, style or script. @type {[string, RegExp][]} */
const EVERYWHERE = [
    ["an address", ADDRESS],
    ["a connection opened ahead of time", /\b(?:preconnect|dns-prefetch)\b/gi],
    ["a peer connection, which the policy does not stop", /\bRTC(?:PeerConnection|DataChannel|IceTransport)\b/gi],
    ["a folder of the building machine", /(?<![\w.])\/(?:home|root|work|tmp|usr|var|opt|Users|builds?)\/[\w.@-]/g],
];

/** What must not stand in a script. @type {[string, RegExp][]} */
const IN_SCRIPT = [
    ["a way to leave the page", /\blocation\s*(?:=(?!=)|\?\.|\[)|\[\s*["'`]location["'`]\s*\]/g],
    ["a way to leave the page", /\blocation\s*\.\s*(?!hash\b)\w+\s*[-+*/%|&^?]*=(?![=>])/g],
    ["a way to leave the page", /\blocation\s*\.\s*(?:assign|replace)\b/g],
    ["a way to leave the page under another name", /(?:[=(,:?&|[]|\breturn)\s*(?:(?:window|self|globalThis|document|top|parent)\s*\.\s*)?location\b(?!\s*[.:\w"'`])/g],
    ["a way to leave the page under another name", /\{[^{}]{0,200}\blocation\b[^{}]{0,200}\}\s*=(?!=)/g],
    ["a way to leave the page", /\bnavigation\s*\??\.\s*navigate\b/g],
    ["a new window", /\b(?:window|self|globalThis|top|parent|defaultView)\s*(?:\?\.|\.)\s*open\b|\[\s*["'`]open["'`]\s*\]|(?<![.\w$])(?<!function )open\s*\(/g],
    ["a script loaded later", /\bimport\s*\(|\bimportScripts\b/g],
];

/** What must not stand in markup. @type {[string, RegExp][]} */
const IN_MARKUP = [
    [
        "an attribute that loads or leads elsewhere",
        /<[a-z][^>]*?\s(?:src|href|xlink:href|action|formaction|srcset|imagesrcset|poster|data|ping|background|manifest|cite)\s*=\s*(?!"#|'#|"data:|'data:)\S+/gi,
    ],
    ["a style outside the style sheet, which the policy drops", /<[a-z][^>]*\sstyle\s*=/gi],
    ["a handler in markup, which the policy drops", /<[a-z][^>]*\son[a-z]+\s*=/gi],
    ["a base, refresh or frame", /<(?:base|i?frame|object|embed|portal)\b|http-equiv\s*=\s*["']?refresh/gi],
];

/** What must not stand in a style sheet. @type {[string, RegExp][]} */
const IN_STYLE = [
    ["a picture or font from elsewhere", /\burl\(\s*["']?(?!["']?(?:#|data:))/gi],
    ["a style sheet loaded later", /@import\b/gi],
];

const CHARSET = '<meta charset="utf-8">';

/**
 * The page in its parts, as the browser sees them.
 * @param {string} page
 */
function partsOf(page) {
    /** @type {string[]} */
    const scripts = [];
    /** @type {string[]} */
    const data = [];
    /** @type {string[]} */
    const styles = [];
    const markup = page
        .replace(/<script\b([^>]*)>(.*?)<\/script\s*>/gis, (_, attributes, text) => {
            const type = /\btype\s*=\s*["']?([^"'\s>]*)/i.exec(attributes)?.[1];
            (type === undefined || /^(|module|importmap|speculationrules|.*(java|ecma)script.*)$/i.test(type) ? scripts : data).push(text);
            return `<script${attributes}></script>`;
        })
        .replace(/<style\b([^>]*)>(.*?)<\/style\s*>/gis, (_, attributes, text) => {
            styles.push(text);
            return `<style${attributes}></style>`;
        });
    return { markup, scripts, styles, data };
}

/**
 * @param {[string, RegExp][]} rules
 * @param {string} text
 * @param {string} where
 * @param {RegExp} vocabularies
 */
function search(rules, text, where, vocabularies = VOCABULARIES) {
    const readable = text.replace(vocabularies, "");
    return rules.flatMap(([what, pattern]) =>
        [...readable.matchAll(pattern)].map((hit) => {
            const near = readable.slice(Math.max(0, hit.index - 30), hit.index + hit[0].length + 50);
            return `${what}, in ${where}: ${JSON.stringify(near)}`;
        }),
    );
}

/** @param {string} text */
const hashOf = (text) => `'sha256-${createHash("sha256").update(text).digest("base64")}'`;

/**
 * The policy must be the first thing said, allow nothing of its own accord, and name exactly what is there.
 * @param {string} page
 * @param {string[]} scripts
 * @param {string[]} styles
 */
function policyFaults(page, scripts, styles) {
    const policies = [...page.matchAll(/<meta http-equiv="Content-Security-Policy" content="([^"]*)">/g)];
    if (policies.length !== 1) return [`${policies.length} policies, not one`];
    const expected =
        `default-src 'none'; script-src ${scripts.map(hashOf).join(" ")} 'wasm-unsafe-eval'; ` +
        `style-src ${styles.map(hashOf).join(" ")}; worker-src blob:; img-src data: blob:; ` +
        "connect-src 'none'; form-action 'none'; base-uri 'none'";
    const faults = [];
    if (policies[0]?.[1] !== expected) faults.push(`the policy is not the one that fits this page: ${policies[0]?.[1]}`);
    if (page.slice(0, policies[0]?.index).trimEnd().endsWith(CHARSET) === false) {
        faults.push("the policy does not stand right after the charset");
    }
    return faults;
}

/**
 * Every reason not to ship this page.
 * @param {string} page
 * @param {string[]} folders absolute paths of the building machine
 * @returns {string[]}
 */
export function faultsOf(page, folders = []) {
    const { markup, scripts, styles, data } = partsOf(page);
    // The core is base64 in the page; what it says is inside. Each byte becomes one character.
    const core = data.map((text) => Buffer.from(text, "base64").toString("latin1"));
    const texts = [page, ...core];
    return [
        ...policyFaults(page, scripts, styles),
        ...search([...EVERYWHERE, ...IN_MARKUP], markup, "the markup"),
        ...styles.flatMap((text) => search([...EVERYWHERE, ...IN_STYLE], text, "a style sheet")),
        ...scripts.flatMap((text) => search([...EVERYWHERE, ...IN_SCRIPT], text, "a script")),
        ...core.flatMap((text) => search(EVERYWHERE, text, "the core", VOCABULARIES_IN_CORE)),
        ...folders
            .filter((folder) => folder.length > 1 && texts.some((text) => text.includes(`${folder}/`)))
            .map((folder) => `a folder of the building machine: ${folder}`),
        ...(data.length === 1 ? [] : [`${data.length} data blocks, not one`]),
    ];
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
    const [file = "", ...folders] = process.argv.slice(2);
    const faults = faultsOf(readFileSync(file, "utf8"), folders);
    for (const fault of faults) console.error(`gate: ${fault}`);
    process.exitCode = faults.length === 0 ? 0 : 1;
}
