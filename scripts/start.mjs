/** `npm start`: builds what is out of date, serves the practice workbook, opens it. `--port N`, `--no-open`. */
import { buildIfStale } from "./build.mjs";
import { open } from "./open.mjs";
import { serve } from "./serve.mjs";

const WANTED = 5870;
const argument = process.argv.indexOf("--port");
const [asked, told] = argument > 0 ? ["--port", process.argv[argument + 1] ?? ""] : ["PORT", process.env.PORT || String(WANTED)];
const wanted = Number(told);
if (!Number.isInteger(wanted) || wanted < 1 || wanted > 65535) {
  console.error(`${asked} "${told}": a port is a whole number from 1 to 65535.`);
  process.exit(1);
}
const started = performance.now();
try {
  await buildIfStale();
  const { url, port } = await serve({ port: wanted });
  if (port !== wanted) console.log(`Port ${wanted} is taken; using ${port}.`);
  console.log(`Practice workbook: ${url}  (ready in ${((performance.now() - started) / 1000).toFixed(1)} s; Ctrl+C ends it)`);
  if (!process.argv.includes("--no-open")) open(url);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exit(1);
}
