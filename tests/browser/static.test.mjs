// The shipped file, read as text: nothing in it reaches out. And the reader is shown one of each thing that it
// is there to find, planted into the shipped file itself.

import assert from "node:assert/strict";
import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import { test } from "node:test";

import { faultsOf } from "../../www/pack/gate.js";
import { PAGE } from "./person.mjs";

const page = readFileSync(PAGE, "utf8");

/** The page's last script with something added, and the policy with the hash that goes with it. */
function withScript(addition) {
    const [, text] = /<script>([^<]*(?:<(?!\/script)[^<]*)*)<\/script>(?![\s\S]*<script)/.exec(page);
    const hash = (script) => `sha256-${createHash("sha256").update(script).digest("base64")}`;
    return page.replace(text, () => text + addition).replace(hash(text), () => hash(text + addition));
}

const withMarkup = (addition) => page.replace("</body>", () => `${addition}</body>`);

/** The core's bytes with a text behind them. */
const withCore = (addition) =>
    page.replace(/(id="core">)([^<]*)/, (_, tag, base64) => tag + Buffer.concat([Buffer.from(base64, "base64"), Buffer.from(addition)]).toString("base64"));

/** The worker's script with something added; it is text to the page, so it has no hash. */
const withWorker = (addition) => page.replace(/(id="worker">)/, (tag) => tag + addition);

test("the shipped page has nothing that reaches out", () => {
    assert.deepEqual(faultsOf(page, [process.cwd()]), []);
});

test("an addition that does no harm is no fault", () => {
    assert.deepEqual(faultsOf(withScript(";location.hash='a';history.replaceState(null,'','#b');if(location.href==='x')location.reload();dialog.open=true")), []);
    assert.deepEqual(faultsOf(withMarkup('<a href="#question">the location of open (import) data = here</a>')), []);
});

const scheme = "http" + "s:"; // in two pieces: this file holds no address itself
const PLANTED = {
    "an address in a script": [withScript(`;var a="${scheme}//elsewhere.invalid/"`), "an address"],
    "an address without its scheme": [withScript(';var a="//elsewhere.invalid/"'), "an address"],
    "a web socket's address": [withScript(';var a="wss:' + '//elsewhere.invalid/"'), "an address"],
    "a peer connection": [withScript(";new RTCPeerConnection()"), "a peer connection"],
    "a connection ahead of time": [withMarkup('<link rel="preconnect">'), "a connection opened ahead"],
    "a name looked up ahead of time": [withMarkup('<link rel="dns-prefetch">'), "a connection opened ahead"],
    "a link to a host": [withMarkup(`<a href="${scheme}//elsewhere.invalid/">a</a>`), "an attribute that"],
    "a link to a host without its scheme": [withMarkup('<a href="//elsewhere.invalid/">a</a>'), "an attribute that"],
    "a link to a file beside it": [withMarkup("<a href=other.html>a</a>"), "an attribute that"],
    "a picture from elsewhere": [withMarkup('<img src="a.png">'), "an attribute that"],
    "a frame": [withMarkup("<iframe srcdoc=a></iframe>"), "a base, refresh or frame"],
    "a refresh": [withMarkup('<meta http-equiv="refresh" content="1">'), "a base, refresh or frame"],
    "a handler in markup": [withMarkup('<b onclick="a()">b</b>'), "a handler in markup"],
    "a style in markup": [withMarkup('<b style="color:red">b</b>'), "a style outside"],
    "another location": [withScript(';location="x"'), "a way to leave"],
    "another location's address": [withScript(';window.location.href="x"'), "a way to leave"],
    "another location's search": [withScript(';location.search+="x"'), "a way to leave"],
    "a location assigned": [withScript(';location.assign("x")'), "a way to leave"],
    "a location replaced": [withScript(';document.location.replace("x")'), "a way to leave"],
    "a location by its name as text": [withScript(';window["location"]=x'), "a way to leave"],
    "a location under another name": [withScript(";let l=window.location;l.href=x"), "a way to leave"],
    "a navigation": [withScript(';navigation.navigate("x")'), "a way to leave"],
    "a new window": [withScript(';window.open("x")'), "a new window"],
    "a new window, in short": [withScript(';open("x")'), "a new window"],
    "a script loaded later": [withScript(';import("x")'), "a script loaded later"],
    "a script loaded later by the worker": [withScript(';importScripts("x")'), "a script loaded later"],
    "a script that the worker itself would load": [withWorker('importScripts("x");'), "a script loaded later"],
    "an address in the worker": [withWorker(`var a="${scheme}//elsewhere.invalid/";`), "an address"],
    "a block of data that nobody knows": [withMarkup('<script type="text/plain" id="other">a</script>'), "the data blocks"],
    "a second worker": [withMarkup('<script type="text/plain" id="worker">a</script>'), "the data blocks"],
    "a folder of somebody's machine": [withScript(';var a="/home' + '/somebody/x"'), "a folder of the building machine"],
    "a folder inside the core": [withCore("/root" + "/registry/src"), "a folder of the building machine"],
    "an address inside the core": [withCore(`${scheme}//elsewhere.invalid/`), "an address"],
    "a second script, which has no hash": [withMarkup("<script>1</script>"), "the policy is not"],
    "a script that changed after hashing": [page.replace(/(<script id="glue">)/, "$1 "), "the policy is not"],
    "a policy that allows more": [page.replace("connect-src 'none'", "connect-src *"), "the policy is not"],
    "a policy that comes late": [page.replace('<meta charset="utf-8">', '<meta charset="utf-8"><title>a</title>'), "the policy does not stand"],
    "no policy": [page.replace(/<meta http-equiv="Content-Security-Policy"[^>]*>/, ""), "0 policies"],
};

for (const [name, [planted, expected]] of Object.entries(PLANTED)) {
    test(`found: ${name}`, () => {
        assert.notEqual(planted, page, "nothing was planted");
        const faults = faultsOf(planted);
        assert.ok(faults.some((fault) => fault.startsWith(expected)), `${expected}; found: ${faults.join("; ")}`);
    });
}

test("found: the folder it was built in, whatever its name", () => {
    assert.deepEqual(faultsOf(withCore("/srv/a b/src"), ["/srv/a b"]), ["a folder of the building machine: /srv/a b"]);
});

test("found: a style sheet that loads", () => {
    for (const rule of ["@import 'a.css';", "b{background:url(a.png)}"]) {
        const planted = page.replace(/<style>/, `<style>${rule}`);
        assert.ok(faultsOf(planted).some((fault) => fault.includes("in a style sheet")), rule);
    }
});
