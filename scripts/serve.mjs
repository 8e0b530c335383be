/** A static server for the built site, on this machine only. */
import { createServer as createHttp } from "node:http";
import { createServer as createHttps } from "node:https";
import sirv from "sirv";
import { DIST } from "./paths.mjs";
import { contentPolicy, loadsHostScript } from "./policy.mjs";

/**
 * @typedef {{ root?: string, port?: number, tries?: number, index?: string, secure?: { key: Buffer, cert: Buffer } }} ServeOptions
 * `port` 0 (the default) takes any free one; a given port that is taken is followed by the next, up to `tries` of them.
 * `index` is the page that the bare address leads to.
 *
 * @param {ServeOptions} [options]
 * @returns {Promise<{ url: string, port: number, close(): Promise<void> }>}
 */
export async function serve({ root = DIST, port = 0, tries = 20, index = "practice.html", secure } = {}) {
  const files = sirv(root, {
    dev: true,
    etag: true,
    setHeaders(response, pathname) {
      if (!pathname.endsWith(".html")) return;
      const policy = contentPolicy({ hostScript: loadsHostScript(pathname.slice(1)) });
      // The pane is shown in a frame by Excel on the web; no other page has a reason to be framed.
      const frames = loadsHostScript(pathname.slice(1)) ? "" : "; frame-ancestors 'none'";
      response.setHeader("Content-Security-Policy", policy + frames);
    },
  });
  /** @type {import("node:http").RequestListener} */
  const listener = (request, response) => {
    response.setHeader("X-Content-Type-Options", "nosniff");
    response.setHeader("Referrer-Policy", "no-referrer");
    if (request.url === "/") {
      response.writeHead(302, { Location: `/${index}` }).end();
      return;
    }
    files(request, response, () => {
      response.writeHead(404, { "Content-Type": "text/plain" }).end("There is no such file.");
    });
  };
  const server = secure ? createHttps(secure, listener) : createHttp(listener);
  const taken = await listen(server, port, tries);
  const host = secure ? "localhost" : "127.0.0.1";
  return {
    url: `${secure ? "https" : "http"}://${host}:${taken}/`,
    port: taken,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}

/**
 * @param {import("node:http").Server | import("node:https").Server} server
 * @param {number} port
 * @param {number} tries
 * @returns {Promise<number>} the port that was free
 */
async function listen(server, port, tries) {
  for (let attempt = 0; ; attempt++) {
    try {
      await new Promise((resolve, reject) => {
        server.once("error", reject);
        server.listen(port === 0 ? 0 : port + attempt, "127.0.0.1", () => {
          server.off("error", reject);
          resolve(undefined);
        });
      });
      const address = server.address();
      return typeof address === "object" && address ? address.port : port;
    } catch (error) {
      const code = /** @type {NodeJS.ErrnoException} */ (error).code;
      if (code !== "EADDRINUSE" && code !== "EACCES") throw error;
      const last = port + attempt;
      if (attempt + 1 < tries && last < 65535) continue;
      throw Object.assign(new Error(`No port from ${port} to ${last} is free (${code}). Choose another with --port.`), { code });
    }
  }
}
