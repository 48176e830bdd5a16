// Files that a page saved.

import { existsSync, readFileSync, readdirSync } from "node:fs";
import { join } from "node:path";
import { setTimeout as pause } from "node:timers/promises";

/** Downloads take a moment. */
export async function waitForFile(folder, pattern) {
    for (let tries = 0; tries < 200; tries += 1) {
        const found = findFile(folder, pattern);
        if (found) return found;
        await pause(100);
    }
    throw new Error("waited 20 s in vain for a download");
}

function findFile(folder, pattern) {
    if (!existsSync(folder)) return undefined;
    const name = readdirSync(folder).find((one) => pattern.test(one));
    const file = name && join(folder, name);
    return file && readFileSync(file).length > 0 ? file : undefined;
}
