/**
 * `npm run excel` (desktop), `npm run excel:web`, `npm run excel:stop`: the built add-in in a real Excel. The tools that serve
 * only this are fetched when it is asked for, since one of them wants a desktop's libraries and weighs 450 MB.
 */
import { spawn } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import { homedir } from "node:os";
import path from "node:path";
import { pathToFileURL } from "node:url";
import { buildIfStale } from "./build.mjs";
import { DEVELOPMENT_ORIGIN } from "./package.mjs";
import { DIST } from "./paths.mjs";
import { serve } from "./serve.mjs";

const CERTIFICATES = "office-addin-dev-certs@3.0.0";
const DEBUGGING = "office-addin-debugging@7.0.0";
const MANIFEST = path.join(DIST, "manifest.xml");

/**
 * @typedef {{ refusal: string } | { fetched: string[][], words: string[] }} Plan
 * What a command does: the fetched tools it runs in order (after the certificate, the site is served until Ctrl+C), and what it
 * says then; or why it cannot be done here and what to do instead.
 *
 * @param {string} command
 * @param {NodeJS.Platform} platform
 * @returns {Plan}
 */
export function plan(command, platform) {
  const hasExcel = platform === "win32" || platform === "darwin";
  switch (command) {
    case "desktop":
      if (!hasExcel) return { refusal: "There is no Excel for this system's desktop. Use `npm run excel:web` with Excel on the web, or `npm start` for the practice workbook." };
      return {
        fetched: [[CERTIFICATES, "install"], [DEBUGGING, "start", MANIFEST, "desktop", "--no-debug"]],
        words: ["Excel opens with the add-in: look for Stayrate on the Home tab. Ctrl+C ends the server; `npm run excel:stop` takes the add-in out again."],
      };
    case "web":
      return {
        fetched: [[CERTIFICATES, "install"]],
        words: [
          "In Excel on the web:",
          "  1. Open a workbook, then Home, Add-ins, More Add-ins, My Add-ins, Upload My Add-in.",
          `  2. Choose ${MANIFEST}`,
          "  3. Stayrate is on the Home tab; type =CTMC. into a cell for the formulas.",
          ...(hasExcel
            ? []
            : [`If the browser does not trust ${DEVELOPMENT_ORIGIN}, open that address once and accept its certificate, or import ${path.join(certificateFolder(), "ca.crt")} in the browser's settings.`]),
          "Ctrl+C ends the server; the add-in stays in that workbook until its list of add-ins is cleared.",
        ],
      };
    case "stop":
      if (!hasExcel) return { refusal: "There is nothing to stop: add-ins are only installed on Windows and Mac desktops. A server started here ends with Ctrl+C." };
      return { fetched: [[DEBUGGING, "stop", MANIFEST]], words: ["The add-in was taken out of Excel."] };
    default:
      return { refusal: `"${command}" is not known: desktop, web or stop.` };
  }
}

function certificateFolder() {
  return path.join(homedir(), ".office-addin-dev-certs");
}

/** The development certificate. @param {string} [folder] @returns {{ key: Buffer, cert: Buffer }} @throws with a sentence when it is not there */
export function certificate(folder = certificateFolder()) {
  const [key, cert] = ["localhost.key", "localhost.crt"].map((name) => path.join(folder, name));
  if (!existsSync(key) || !existsSync(cert)) throw new Error(`The development certificate is not in ${folder}. Run \`npx --yes ${CERTIFICATES} install\` by hand to see why.`);
  return { key: readFileSync(key), cert: readFileSync(cert) };
}

/** Serves the site where the manifest expects it, over https. @param {{ key: Buffer, cert: Buffer }} secure */
export async function serveForExcel(secure) {
  const port = Number(new URL(DEVELOPMENT_ORIGIN).port);
  try {
    return await serve({ port, tries: 1, index: "support.html", secure });
  } catch (error) {
    if (/** @type {NodeJS.ErrnoException} */ (error).code !== "EADDRINUSE") throw error;
    throw new Error(`Port ${port}, which the manifest names, is taken, perhaps by an earlier \`npm run excel\`. End that first.`);
  }
}

/** Fetches and runs a tool; the server goes on answering meanwhile. @param {string} tool @param {string[]} args @returns {Promise<boolean>} */
function runFetched(tool, args) {
  console.log(`Running ${tool} …`);
  // npx is a script of the shell on Windows, where a path may hold blanks.
  const shell = process.platform === "win32";
  const child = spawn("npx", ["--yes", tool, ...args.map((one) => (shell ? `"${one}"` : one))], { stdio: "inherit", shell });
  return new Promise((resolve) => {
    child.on("error", () => resolve(false));
    child.on("exit", (code) => resolve(code === 0));
  });
}

/** @param {string} command */
async function carryOut(command) {
  const todo = plan(command, process.platform);
  if ("refusal" in todo) throw new Error(todo.refusal);
  await buildIfStale();
  for (const [tool, ...args] of todo.fetched) {
    if (tool === CERTIFICATES) {
      // Where the certificate cannot be made trusted it is still made: the browser then asks once.
      if (!(await runFetched(tool, args))) console.log("The certificate could not be made known to this system.");
      const { url } = await serveForExcel(certificate());
      console.log(`Serving ${url}`);
    } else if (!(await runFetched(tool, args))) throw new Error(`${tool} did not succeed; its own words are above.`);
  }
  for (const line of todo.words) console.log(line);
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  carryOut(process.argv[2] ?? "").catch((error) => {
    console.error(error instanceof Error ? error.message : error);
    process.exit(1);
  });
}
