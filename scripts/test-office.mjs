/**
 * `npm run test:office`: saves workbooks as .xlsx, has LibreOffice read them without a window, and compares what it
 * shows with what the practice workbook shows. LibreOffice works tables out anew, so the values that the file keeps
 * for programs without the add-in are read by openpyxl. Installs both from Debian when they are absent and this is root.
 */
import { spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { createServer } from "vite";
import { buildIfStale } from "./build.mjs";
import { DIST, ROOT } from "./paths.mjs";

/** Largest relative difference of two numbers that count as the same, where LibreOffice prints 15 digits; measured worst: 1.9e-13. */
const TOLERANCE = 1e-12;

const READER = `
import json, sys, openpyxl
from openpyxl.utils.datetime import to_excel
book = openpyxl.load_workbook(sys.argv[1], data_only=True)
def plain(value):
    return value if value is None or isinstance(value, (bool, int, float, str)) else to_excel(value)
print(json.dumps({sheet.title: [[plain(cell.value) for cell in row] for row in sheet.iter_rows()] for sheet in book}))
`;

const office = findOffice();
const python = findReader();
await buildIfStale();
// A loader of the sources only: it listens nowhere and watches nothing.
const loader = await createServer({ root: ROOT, configFile: false, appType: "custom", logLevel: "error", server: { middlewareMode: true, ws: false, watch: null }, optimizeDeps: { noDiscovery: true } });
const module = await loader.ssrLoadModule("/test/office/files.ts");
const folder = mkdtempSync(path.join(tmpdir(), "office-"));
let failures = 0;
try {
  for (const file of await module.officeFiles(DIST)) failures += await check(file);
} finally {
  await loader.close();
  rmSync(folder, { recursive: true, force: true });
}
console.log(failures === 0 ? "Everything agrees." : `${failures} differences.`);
process.exitCode = failures === 0 ? 0 : 1;

/** @returns {string} */
function findOffice() {
  for (const name of ["soffice", "libreoffice"]) {
    const { stdout, status } = spawnSync(name, ["--version"], { encoding: "utf8" });
    if (status === 0) {
      console.log(stdout.trim());
      return name;
    }
  }
  if (!install("libreoffice-calc-nogui")) throw new Error("This test needs LibreOffice Calc. Install it, so that the command soffice is there, and try again.");
  return "soffice";
}

/** @returns {string | null} */
function findReader() {
  const find = () => ["/usr/bin/python3", "python3", "python"].find((name) => spawnSync(name, ["-c", "import openpyxl"]).status === 0) ?? null;
  const found = find() ?? (install("python3-openpyxl") ? find() : null);
  if (!found) console.log("openpyxl is not here; the values kept in the files are not checked.");
  return found;
}

/** @param {string} name of a Debian package */
function install(name) {
  if (process.getuid?.() !== 0 || !existsSync("/usr/bin/apt-get")) return false;
  console.log(`Installing Debian's package ${name}.`);
  const apt = (/** @type {string[]} */ ...args) => spawnSync("apt-get", args, { stdio: ["ignore", "ignore", "inherit"], env: { ...process.env, DEBIAN_FRONTEND: "noninteractive" } }).status === 0;
  const get = () => apt("install", "-y", "--no-install-recommends", name);
  return get() || (apt("update") && get());
}

/** @param {string} file @param {string} kind @param {string} to */
function convert(file, kind, to) {
  const profile = `-env:UserInstallation=file://${folder}/profile`;
  const result = spawnSync(office, [profile, "--headless", "--convert-to", kind, "--outdir", to, file], { encoding: "utf8", timeout: 180_000 });
  if (result.status !== 0) throw new Error(`LibreOffice could not convert ${file}: ${result.stderr || result.error?.message}`);
}

/** @param {{ name: string, bytes: Uint8Array, kept: boolean, sheets: { name: string, rows: { value: number | string | boolean, text: string, formula: string | null, addIn: boolean }[][] }[] }} file */
async function check(file) {
  const source = path.join(folder, `${file.name}.xlsx`);
  writeFileSync(source, file.bytes);
  const out = path.join(folder, file.name);
  // Comma, quotes, UTF-8; every text in quotes; values as shown; every sheet a file of its own.
  convert(source, "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,true,true,true,false,false,-1", out);
  let differences = 0;
  let compared = 0;
  let computed = 0;
  let unknown = 0;
  let worst = 0;
  for (const sheet of file.sheets) {
    const name = readdirSync(out).find((entry) => entry === `${file.name}-${sheet.name}.csv`);
    if (!name) throw new Error(`LibreOffice wrote no values of the sheet "${sheet.name}".`);
    const shown = readCsv(readFileSync(path.join(out, name), "utf8"));
    sheet.rows.forEach((row, r) =>
      row.forEach(({ value, text, formula, addIn }, c) => {
        const theirs = shown[r]?.[c] ?? { text: "", quoted: false };
        if (addIn) {
          // LibreOffice works tables out anew on opening, and does not know the add-in's functions; it must say just that.
          unknown++;
          if (theirs.text === "#NAME?") return;
        }
        const { same, error } = theirs.text === text ? { same: true, error: 0 } : compare(value, theirs);
        compared++;
        if (formula !== null) computed++;
        worst = Math.max(worst, error);
        if (same) return;
        differences++;
        console.error(`${file.name}, ${sheet.name}, row ${r + 1}, column ${c + 1}${formula === null ? "" : ` (${formula})`}: ours ${JSON.stringify(value)}, theirs ${JSON.stringify(theirs.text)}`);
      }),
    );
  }
  if (file.kept) differences += checkKept(file, source);
  const back = path.join(folder, `${file.name}-back`);
  convert(source, "xlsx:Calc MS Excel 2007 XML", back);
  const again = await module.reopened(new Uint8Array(readFileSync(path.join(back, `${file.name}.xlsx`))));
  const names = file.sheets.map((sheet) => sheet.name);
  if (JSON.stringify(again.sheets) !== JSON.stringify(names)) {
    differences++;
    console.error(`${file.name}: after LibreOffice saved the file its sheets are ${again.sheets.join(", ")}.`);
  }
  console.log(`${file.name}: ${compared} cells agree or differ as listed, ${computed} of them filled by formulas; ${unknown} more rest on the add-in's functions, which it does not know; worst relative difference ${worst.toExponential(1)}; saved again by LibreOffice it has ${again.formulas} formulas and ${Object.keys(again.store).length} kept entries.`);
  return differences;
}

/**
 * The values that the file keeps beside its formulas, read by a program that calculates nothing.
 * @param {{ name: string, sheets: { name: string, rows: { value: number | string | boolean, formula: string | null }[][] }[] }} file
 * @param {string} source
 */
function checkKept(file, source) {
  if (!python) return 0;
  const { stdout, stderr, status } = spawnSync(python, ["-c", READER, source], { encoding: "utf8", maxBuffer: 1e8 });
  if (status !== 0) throw new Error(`openpyxl could not read ${file.name}: ${stderr}`);
  const kept = JSON.parse(stdout);
  let differences = 0;
  let filled = 0;
  for (const sheet of file.sheets) {
    sheet.rows.forEach((row, r) =>
      row.forEach(({ value, formula }, c) => {
        if (formula !== null) filled++;
        const theirs = kept[sheet.name]?.[r]?.[c] ?? "";
        if (theirs === value) return;
        differences++;
        console.error(`${file.name}, ${sheet.name}, row ${r + 1}, column ${c + 1}: ours ${JSON.stringify(value)}, kept ${JSON.stringify(theirs)}`);
      }),
    );
  }
  console.log(`${file.name}: the file keeps the values of all ${filled} cells filled by formulas, bit for bit${differences ? `, but for ${differences}` : ""} (openpyxl).`);
  return differences;
}

/** @param {number | string | boolean} ours @param {{ text: string, quoted: boolean }} theirs */
function compare(ours, theirs) {
  if (typeof ours === "number") {
    const number = Number(theirs.text);
    const error = theirs.text === "" ? (ours === 0 ? 0 : Infinity) : Math.abs(number - ours) / Math.max(Math.abs(ours), 1e-300);
    return { same: !theirs.quoted && (error <= TOLERANCE || (ours === 0 && number === 0)), error: ours === 0 ? 0 : error };
  }
  if (typeof ours === "boolean") return { same: theirs.text === (ours ? "TRUE" : "FALSE") || Number(theirs.text || NaN) === Number(ours), error: 0 };
  // LibreOffice has words or numbers of its own for errors.
  if (/^#[A-Z/0]+[!?]?$/.test(ours)) return { same: /^(#|Err:)/.test(theirs.text), error: 0 };
  return { same: ours === theirs.text, error: 0 };
}

/** @param {string} text */
function readCsv(text) {
  /** @type {{ text: string, quoted: boolean }[][]} */
  const rows = [[]];
  const field = /("(?:[^"]|"")*"|[^,\n]*)(,|\n|$)/g;
  for (let match = field.exec(text); match && match.index < text.length; match = field.exec(text)) {
    const quoted = match[1].startsWith('"');
    rows.at(-1)?.push({ text: quoted ? match[1].slice(1, -1).replace(/""/g, '"') : match[1], quoted });
    if (match[2] === "\n") rows.push([]);
  }
  return rows;
}
