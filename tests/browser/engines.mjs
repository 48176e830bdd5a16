// The three browser engines, each with its driver, as a person would have them: a fresh profile, files opened
// from disk under the browser's own rules, and every request led to a listener.

import { spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { createServer } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as pause } from "node:timers/promises";

import { listen } from "./listener.mjs";
import { Person } from "./person.mjs";

export const ENGINES = ["chromium", "firefox", "webkit"];

/**
 * Each engine's driver, what to ask it for, and the hosts that the browser visits on its own account, even with
 * an empty page and told not to; no setting stops it from all of them.
 */
const KINDS = {
    chromium: {
        own: /[\w-]+\.(?:google|googleapis|gstatic|gvt1|duckduckgo)\.com$/,
        driver: (port) => ["chromedriver", `--port=${port}`],
        environment: () => ({}),
        capabilities: ({ scratch, proxy, dark }) => ({
            "goog:loggingPrefs": { browser: "ALL" },
            "goog:chromeOptions": {
                binary: "/usr/bin/chromium",
                args: [
                    "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
                    "--disable-background-networking", "--disable-component-update", "--disable-sync",
                    "--disable-default-apps", "--disable-domain-reliability", "--no-pings",
                    `--user-data-dir=${join(scratch, "profile")}`, `--proxy-server=127.0.0.1:${proxy}`,
                    ...(dark ? ["--force-dark-mode", "--blink-settings=preferredColorScheme=0"] : []),
                ],
            },
        }),
    },
    firefox: {
        own: /[\w-]+\.(?:mozilla|firefox)\.(?:com|net|org)$/,
        driver: (port) => ["geckodriver", "--port", String(port), "--websocket-port", "0"],
        environment: () => ({}),
        capabilities: ({ scratch, proxy, dark }) => ({
            "moz:firefoxOptions": {
                binary: "/usr/bin/firefox-esr",
                args: ["-headless"],
                prefs: {
                    // The driver relaxes this rule; a person's browser does not.
                    "security.fileuri.strict_origin_policy": true,
                    "layout.css.prefers-color-scheme.content-override": dark ? 0 : 1,
                    "browser.download.folderList": 2,
                    "browser.download.dir": scratch,
                    "network.proxy.type": 1,
                    "network.proxy.http": "127.0.0.1",
                    "network.proxy.http_port": proxy,
                    "network.proxy.ssl": "127.0.0.1",
                    "network.proxy.ssl_port": proxy,
                },
            },
        }),
    },
    webkit: {
        own: /^$/,
        driver: (port) => ["WebKitWebDriver", `--port=${port}`],
        environment: ({ dark, display }) => ({ DISPLAY: display, GTK_THEME: dark ? "Adwaita:dark" : "Adwaita" }),
        capabilities: ({ proxy }) => ({
            browserName: "MiniBrowser",
            proxy: { proxyType: "manual", httpProxy: `127.0.0.1:${proxy}`, sslProxy: `127.0.0.1:${proxy}` },
            "webkitgtk:browserOptions": {
                binary: "/usr/lib/x86_64-linux-gnu/webkit2gtk-4.1/MiniBrowser",
                args: ["--automation"],
            },
        }),
    },
};

/** Starts a browser and its listener. `close` ends all of it, also when something failed on the way. */
export async function start(engine, { dark = false } = {}) {
    const kind = KINDS[engine];
    const scratch = mkdtempSync(join(tmpdir(), "leastlight-"));
    const listener = await listen(kind.own);
    const children = [];
    const output = [];
    const close = async () => {
        for (const child of children.toReversed()) await stop(child);
        await listener.close();
        rmSync(scratch, { recursive: true, force: true, maxRetries: 5 });
    };
    try {
        const display = engine === "webkit" ? await displayOf(children) : undefined;
        const at = { scratch, proxy: listener.port, dark, display };
        const port = await freePort();
        const [command, ...args] = kind.driver(port);
        const driver = spawn(command, args, {
            detached: true, // a group of its own, so that the browser ends with it
            env: { ...process.env, HOME: scratch, XDG_RUNTIME_DIR: scratch, ...kind.environment(at) },
        });
        driver.on("error", (error) => output.push(`${command}: ${error.message}`));
        for (const stream of [driver.stdout, driver.stderr]) stream.setEncoding("utf8").on("data", (text) => output.push(text));
        children.push(driver);
        const person = new Person(`http://127.0.0.1:${port}`, { engine, scratch, listener });
        await ready(person, driver, output);
        await person.begin(kind.capabilities(at));
        if (engine === "chromium") {
            // Without a window, its preferences do not say where downloads go.
            const params = { behavior: "allow", downloadPath: scratch };
            await person.command("POST", "/goog/cdp/execute", { cmd: "Browser.setDownloadBehavior", params });
        }
        return Object.assign(person, {
            close: async () => {
                await person.end().catch(() => {});
                await close();
            },
        });
    } catch (error) {
        await close();
        throw new Error(`${engine} did not start: ${error.message}\n${output.join("").slice(-2000)}`, { cause: error });
    }
}

async function ready(person, driver, output) {
    for (let tries = 0; tries < 200; tries += 1) {
        if (driver.exitCode !== null || driver.pid === undefined) break;
        if (await person.command("GET", "/status", {}, 1000).then(() => true, () => false)) return;
        await pause(50);
    }
    throw new Error(`the driver does not answer: ${output.join("")}`);
}

/** A display that nobody sees; the server names it on the descriptor it is given. */
function displayOf(children) {
    const server = spawn("Xvfb", ["-displayfd", "3", "-screen", "0", "1600x1200x24", "-nolisten", "tcp"], {
        detached: true,
        stdio: ["ignore", "ignore", "ignore", "pipe"],
    });
    children.push(server);
    return new Promise((found, failed) => {
        server.on("error", failed);
        server.on("exit", (code) => failed(new Error(`Xvfb ended with ${code}`)));
        server.stdio[3].once("data", (number) => found(`:${String(number).trim()}`));
    });
}

function freePort() {
    return new Promise((found) => {
        const server = createServer().listen(0, "127.0.0.1", () => {
            const { port } = server.address();
            server.close(() => found(port));
        });
    });
}

async function stop(child) {
    if (child.pid === undefined || child.exitCode !== null) return;
    const ended = new Promise((done) => child.once("exit", done));
    process.kill(-child.pid, "SIGTERM");
    await Promise.race([ended, pause(3000)]);
    try {
        process.kill(-child.pid, "SIGKILL"); // what the driver left behind
    } catch {
        // the whole group is gone already
    }
}
