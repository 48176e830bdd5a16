// A server on loopback that writes down whatever reaches it. The browsers use it as their proxy too, so a
// request to any host at all arrives here.

import { createServer } from "node:http";

/**
 * Starts listening; `heard` fills with one line a request.
 * @param {RegExp} own hosts that the browser visits on its own account: refused like all others, not written down
 */
export async function listen(own) {
    const heard = [];
    const hear = (verb, request) => {
        if (!own.test((request.headers.host ?? "").replace(/:\d+$/, ""))) heard.push(`${verb} ${request.url}`);
    };
    const server = createServer((request, response) => {
        hear(request.method, request);
        response.writeHead(204, { "access-control-allow-origin": "*" }).end();
    });
    // What a browser sends its proxy first when the address begins with https or wss.
    server.on("connect", (request, socket) => {
        hear("CONNECT", request);
        // A browser may hang up before it has read the refusal.
        socket.on("error", () => {});
        socket.end("HTTP/1.1 403 Forbidden\r\n\r\n");
    });
    server.on("upgrade", (request, socket) => {
        hear("UPGRADE", request);
        socket.destroy();
    });
    server.on("clientError", (error, socket) => {
        // Bytes that are no HTTP were sent to somebody; a connection that the browser itself closed again said nothing.
        if (error.code !== "ECONNRESET") heard.push(`not HTTP: ${error.message}`);
        socket.destroy();
    });
    await new Promise((ready) => server.listen(0, "127.0.0.1", ready));
    const { port } = server.address();
    return {
        heard,
        port,
        close: () => {
            server.closeAllConnections();
            return new Promise((closed) => server.close(closed));
        },
    };
}
