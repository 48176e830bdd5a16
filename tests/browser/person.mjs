// What a person does with the page, and what they would notice.

import { mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { createRequire } from "node:module";
import { dirname, join } from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";

import { KEYS, Session } from "./webdriver.mjs";

const ROOT = join(dirname(fileURLToPath(import.meta.url)), "..", "..");
export const PAGE = join(ROOT, "dist", "leastlight.html");

/**
 * Only Chromium's driver tells what the console says. For the others the copy of the page begins with a script
 * that writes it down; it stands before the policy, which rules only over what comes after it.
 */
const NOTEBOOK = `<script>{
    const noted = [];
    Object.defineProperty(window, "complaintsNoted", { value: noted });
    addEventListener("error", (event) => noted.push("error: " + (event.message || event.target?.outerHTML)), true);
    addEventListener("unhandledrejection", (event) => noted.push("rejection: " + event.reason));
    document.addEventListener("securitypolicyviolation", (event) => noted.push("Content Security Policy: " + event.violatedDirective + " " + event.blockedURI));
    for (const level of ["error", "warn"]) {
        const say = console[level].bind(console);
        console[level] = (...words) => { noted.push(level + ": " + words.join(" ")); say(...words); };
    }
}</script>`;

const CHARSET = '<meta charset="utf-8">';

export class Person extends Session {
    /** @param {string} base @param {object} surroundings engine, scratch folder, listener */
    constructor(base, surroundings) {
        super(base);
        Object.assign(this, surroundings);
        this.noted = [];
    }

    /** Opens a copy of the page by double click, from a folder with a name such as people give. */
    async openPage(page = readFileSync(PAGE)) {
        const folder = join(this.scratch, "Überprüfung 50 % #2 µW");
        mkdirSync(folder, { recursive: true });
        const file = join(folder, "leastlight copy.html");
        const text = String(page);
        writeFileSync(file, this.engine === "chromium" ? text : text.replace(CHARSET, () => CHARSET + NOTEBOOK));
        await this.leave();
        await this.open(pathToFileURL(file).href);
    }

    async reload() {
        await this.leave();
        await super.reload();
    }

    /** What was noted in a page goes with it, so it is fetched first. */
    async leave() {
        if (this.engine !== "chromium") this.noted.push(...(await this.run(() => window.complaintsNoted?.splice(0) ?? [])));
    }

    /** The field that bears a pointer, for whatever form owns it. */
    async field(pointer) {
        const element = await this.run((name) => {
            for (const form of document.forms) {
                const found = form.elements.namedItem(name);
                if (found) return found instanceof RadioNodeList ? found[0] : found;
            }
            return null;
        }, pointer);
        if (element === null) throw new Error(`no field is named ${pointer}`);
        return element;
    }

    /** Replaces what stands in a field by keystrokes. */
    async fill(pointer, text) {
        const element = await this.field(pointer);
        await this.run((input) => {
            input.focus();
            input.select();
        }, element);
        await this.type(element, text === "" ? KEYS.Backspace : text);
    }

    /** Takes one of several: an option, a radio button or a tick. */
    async choose(pointer, value) {
        const element = await this.run((name, wanted) => {
            for (const form of document.forms) {
                const found = form.elements.namedItem(name);
                const options = found instanceof RadioNodeList ? [...found] : [...(found?.options ?? [])];
                const option = options.find((one) => one.value === wanted);
                if (option) return option;
            }
            return null;
        }, pointer, value);
        if (element === null) throw new Error(`${pointer} has no choice ${value}`);
        await this.click(element);
    }

    /** Lays a file into a file input, as the browser's own window would. */
    async giveFile(selector, name, text) {
        const file = join(this.scratch, name);
        writeFileSync(file, text);
        await this.type(await this.find(selector), file);
    }

    /** Drops a file onto an element. */
    dropFile(selector, name, text) {
        return this.run((target, fileName, content) => {
            const held = new DataTransfer();
            held.items.add(new File([content], fileName, { type: "text/plain" }));
            for (const type of ["dragenter", "dragover", "drop"]) {
                document.querySelector(target).dispatchEvent(new DragEvent(type, { dataTransfer: held, bubbles: true, cancelable: true }));
            }
        }, selector, name, text);
    }

    /** What is to be read in the first element that fits; null where there is none. */
    read(selector) {
        return this.run((wanted) => document.querySelector(wanted)?.innerText ?? null, selector);
    }

    value(pointer) {
        return this.field(pointer).then((element) => this.run((input) => input.value, element));
    }

    /** A window whose inside has this width and height, as near as the browser lets it. */
    async resize(width, height) {
        if (this.engine === "chromium") {
            // Its window cannot be as narrow as a phone.
            await this.command("POST", "/goog/cdp/execute", {
                cmd: "Emulation.setDeviceMetricsOverride",
                params: { width, height, deviceScaleFactor: 1, mobile: false },
            });
        } else {
            await this.command("POST", "/window/rect", { width, height });
            const [inside, high] = await this.run(() => [innerWidth, innerHeight]);
            await this.command("POST", "/window/rect", { width: 2 * width - inside, height: 2 * height - high });
        }
        return this.run(() => [innerWidth, innerHeight]);
    }

    /** Keeps a picture for people to look at, and gives it. */
    async photograph(name) {
        const picture = await this.screenshot();
        const folder = join(ROOT, "target", "pictures");
        mkdirSync(folder, { recursive: true });
        writeFileSync(join(folder, `${name}-${this.engine}.png`), picture);
        return picture;
    }

    /** What an accessibility checker objects to, one line each. */
    async barriers() {
        // What is said fades, and on its way the checker finds it too faint.
        await this.until("nothing is being said", () => {
            const said = document.getElementById("said");
            return !said || getComputedStyle(said).opacity === "0";
        });
        await this.inject(readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8"));
        const found = await this.runAsync(async () => {
            const { violations } = await window.axe.run(document, { resultTypes: ["violations"] });
            return violations.map(({ id, help, nodes }) => `${id}: ${help}: ${nodes.map((node) => node.html).join(" ").slice(0, 300)}`);
        });
        return found;
    }

    /** What the browser complained about since the last time: errors in scripts, breaches of the policy. */
    async complaints() {
        if (this.engine === "chromium") {
            const entries = await this.command("POST", "/se/log", { type: "browser" });
            return entries.filter(({ level }) => level === "SEVERE" || level === "WARNING").map(({ message }) => message);
        }
        await this.leave();
        return this.noted.splice(0);
    }
}
