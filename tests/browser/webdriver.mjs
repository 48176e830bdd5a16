// A client of the W3C WebDriver protocol, as much of it as the walks need.

import { setTimeout as pause } from "node:timers/promises";

/** The key under which the protocol hands out elements (W3C WebDriver, section 12.1 "Elements"). */
const ELEMENT = "element-6066-11e4-a52e-4f735466cecf";

/** How long one command may take. A driver without a display would otherwise wait for ever. */
const COMMAND_MS = 60_000;

/** Keys by their name in the protocol (W3C WebDriver, section 17.4.2 "Keyboard actions"). */
export const KEYS = {
    Backspace: "\uE003", Tab: "\uE004", Enter: "\uE007", Shift: "\uE008", Control: "\uE009", Alt: "\uE00A",
    Escape: "\uE00C", Space: " ", PageUp: "\uE00E", PageDown: "\uE00F", End: "\uE010", Home: "\uE011",
    ArrowLeft: "\uE012", ArrowUp: "\uE013", ArrowRight: "\uE014", ArrowDown: "\uE015", Delete: "\uE017",
};

export class Session {
    /** @param {string} base address of the driver */
    constructor(base) {
        this.base = base;
        this.path = "";
    }

    async command(method, path, body = {}, limit = COMMAND_MS) {
        const answer = await fetch(`${this.base}${this.path}${path}`, {
            method,
            headers: { "content-type": "application/json" },
            body: method === "POST" ? JSON.stringify(body) : undefined,
            signal: AbortSignal.timeout(limit),
        });
        const { value } = await answer.json();
        if (!answer.ok) throw new Error(`${method} ${path}: ${value.error}: ${value.message}`);
        return value;
    }

    async begin(capabilities) {
        const { sessionId } = await this.command("POST", "/session", { capabilities: { alwaysMatch: capabilities } });
        this.path = `/session/${sessionId}`;
        await this.command("POST", "/timeouts", { script: COMMAND_MS / 2, pageLoad: COMMAND_MS / 2, implicit: 0 });
    }

    async end() {
        await this.command("DELETE", "");
    }

    open(url) {
        return this.command("POST", "/url", { url });
    }

    reload() {
        return this.command("POST", "/refresh");
    }

    /** Runs a function inside the page. It sees its arguments and nothing from here. */
    run(inPage, ...args) {
        return this.command("POST", "/execute/sync", { script: `return (${inPage})(...arguments)`, args });
    }

    /** The same for one that returns a promise. */
    async runAsync(inPage, ...args) {
        const script = `const values = [...arguments], done = values.pop();
            (async () => (${inPage})(...values))().then((value) => done({ value }), (error) => done({ error: String(error) }))`;
        const { value, error } = await this.command("POST", "/execute/async", { script, args });
        if (error !== undefined) throw new Error(error);
        return value;
    }

    /** Runs what stands in a text, as if the page had come with it. */
    inject(source) {
        return this.command("POST", "/execute/sync", { script: source, args: [] });
    }

    /** Asks the page again and again until the answer is truthy, and gives that answer. */
    async until(what, inPage, ...args) {
        const end = Date.now() + 20_000;
        for (;;) {
            const value = await this.run(inPage, ...args);
            if (value) return value;
            if (Date.now() > end) throw new Error(`waited 20 s in vain until ${what}`);
            await pause(50);
        }
    }

    async find(selector) {
        return this.command("POST", "/element", { using: "css selector", value: selector });
    }

    click(element) {
        return this.command("POST", `/element/${element[ELEMENT]}/click`);
    }

    /** Keystrokes into one element; a path, if it is a file input. */
    type(element, text) {
        return this.command("POST", `/element/${element[ELEMENT]}/value`, { text });
    }

    /** One key with its modifiers, such as "Control+z", wherever the focus is. */
    async press(combination) {
        const keys = combination.split("+").map((name) => KEYS[name] ?? name);
        const down = keys.map((value) => ({ type: "keyDown", value }));
        const up = keys.toReversed().map((value) => ({ type: "keyUp", value }));
        await this.command("POST", "/actions", { actions: [{ type: "key", id: "keyboard", actions: [...down, ...up] }] });
    }

    /** Moves the pointer to the middle of an element, and by so many pixels from there. */
    async point(element, x = 0, y = 0) {
        const move = { type: "pointerMove", duration: 0, origin: element, x: Math.round(x), y: Math.round(y) };
        await this.command("POST", "/actions", {
            actions: [{ type: "pointer", id: "mouse", parameters: { pointerType: "mouse" }, actions: [move] }],
        });
    }

    /** A picture of the window as PNG. */
    async screenshot() {
        // WebKit's picture can be one paint behind the document.
        await this.runAsync(() => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => done(1)))));
        return Buffer.from(await this.command("GET", "/screenshot"), "base64");
    }
}
