import { Book, copy, CustomFunctionHost, EditRefused, fill, move, paste, type Area, type Edit, type FunctionsFile } from "../../src/host/practice/engine";

export interface SoakOptions {
  readonly seed: number;
  readonly milliseconds: number;
  /** The built functions.js and functions.json. */
  readonly script: string;
  readonly metadata: FunctionsFile;
  onRound?(round: number, steps: number): void;
}

export interface SoakReport {
  readonly rounds: number;
  readonly steps: number;
  readonly refused: number;
  readonly undone: number;
}

const SIZE = 12;
const ENTRIES = [
  "1", "0.02", "0,5", "-3", "1e300", "text", "'=A1", "TRUE", "", "", "=A1+B2", "=SUM(A1:C4)", "=A1:B3*2", "=SEQUENCE(2,3)", "=C3#", "=IF(A1>1,B1,C1)", "=1/0",
  "=CTMC.TRANSITION(A1:C3,2)", "=CTMC.STATIONARY(A1:D4)", "=CTMC.CHECK(A1:D4)", "=CTMC.MEANABSORPTION(A1:C3,3)", "=CTMC.GENERATOR(A1:C3)", "=CTMC.CLASSES(B2:E5)",
  "=LET(x,A1,x*x)", "=INDEX(A1:D4,2,2)", "=TRANSPOSE(A1:B3)", "=Other!A1", "=OFFSET(A1,1,1)", "=\"a\"&A1", "12%", "=SUM(A:A)", "=)(", "=A1048576",
];
const FORMATS = ["General", "0.00", "0%", "0.00E+00", "yyyy-mm-dd"];

/** Numbers that look random and come again for the same seed (mulberry32). */
function randomOf(seed: number): (below: number) => number {
  let state = seed >>> 0;
  return (below) => {
    state = (state + 0x6d2b79f5) >>> 0;
    let z = Math.imul(state ^ (state >>> 15), 1 | state);
    z = (z + Math.imul(z ^ (z >>> 7), 61 | z)) ^ z;
    return Math.floor((((z ^ (z >>> 14)) >>> 0) / 2 ** 32) * below);
  };
}

/**
 * Edits a workbook at random for a while, round by round, each round a new workbook of some two hundred steps. After each round: what is
 * shown is what a full recalculation shows; the saved form opens as the same; undoing everything leads back to the empty
 * workbook, doing everything again to the last.
 * @throws with seed, round and the steps so far when anything else happens, or a step throws other than in words
 */
export async function soak({ seed, milliseconds, script, metadata, onRound }: SoakOptions): Promise<SoakReport> {
  const end = Date.now() + milliseconds;
  let rounds = 0;
  let steps = 0;
  let refused = 0;
  let undone = 0;
  while (Date.now() < end || rounds === 0) {
    const random = randomOf(seed + rounds);
    const trail: string[] = [];
    // A host of its own: it keeps the workbooks that listen to it, as a page has one for as long as it lives.
    const functions = new CustomFunctionHost();
    functions.load(script, metadata);
    try {
      const book = new Book({ functions, now: () => new Date(2026, 0, 1), random: () => 0.5 });
      const empty = saved(book);
      for (let step = 0; step < 200; step++) {
        steps++;
        try {
          undone += act(book, random, trail) ? 1 : 0;
        } catch (error) {
          if (!(error instanceof EditRefused)) throw error;
          if (!/^\S.*\.$/s.test(error.message)) throw new Error(`"${error.message}" is no sentence.`);
          refused++;
        }
        if (step % 20 === 0) await book.whenIdle();
      }
      await book.whenIdle();
      await checkRound(book, empty, functions);
    } catch (error) {
      throw new Error(`Seed ${seed}, round ${rounds} (again alone: --seed ${seed + rounds}):\n${trail.slice(-30).join("\n")}\n${error instanceof Error ? (error.stack ?? error.message) : String(error)}`);
    }
    rounds++;
    onRound?.(rounds, steps);
  }
  return { rounds, steps, refused, undone };
}

/** One step of a person; whether it was an undo or redo. */
function act(book: Book, random: (below: number) => number, trail: string[]): boolean {
  const sheets = book.sheets();
  const sheet = sheets[random(sheets.length)].id;
  const area = (): Area => ({ sheet, row: random(SIZE), column: random(SIZE), rows: 1 + random(4), columns: 1 + random(4) });
  const apply = (edit: Edit): void => {
    trail.push(JSON.stringify(edit));
    book.apply([edit], "step");
  };
  const kind = random(100);
  if (kind < 55) apply({ kind: "type", sheet, row: random(SIZE), column: random(SIZE), text: ENTRIES[random(ENTRIES.length)] });
  else if (kind < 62) apply({ kind: "clear", area: area() });
  else if (kind < 66) apply({ kind: "format", area: area(), format: FORMATS[random(FORMATS.length)] });
  else if (kind < 72) {
    const [source, target] = [area(), area()];
    trail.push(`paste ${JSON.stringify([source, target])}`);
    paste(book, copy(book, source), target);
  } else if (kind < 77) {
    const source = area();
    const target = { ...source, rows: source.rows + random(3), columns: source.columns };
    trail.push(`fill ${JSON.stringify([source, target])}`);
    fill(book, source, target);
  } else if (kind < 81) {
    const [from, to] = [area(), area()];
    trail.push(`move ${JSON.stringify([from, to])}`);
    move(book, from, to);
  } else if (kind < 84) apply({ kind: random(2) ? "merge" : "unmerge", area: area() });
  else if (kind < 86) apply({ kind: "hideRows", sheet, from: random(SIZE), count: 1, hidden: random(2) === 1 });
  else if (kind < 88) apply({ kind: "addSheet", name: random(2) ? "Other" : book.freeName("Sheet") });
  else if (kind < 89) apply({ kind: "removeSheet", sheet });
  else if (kind < 90) apply({ kind: "renameSheet", sheet, name: random(2) ? "Other" : "Plan it" });
  else if (kind < 97) {
    trail.push("undo");
    return book.undo() !== null;
  } else {
    trail.push("redo");
    return book.redo() !== null;
  }
  return false;
}

async function checkRound(book: Book, empty: string, functions: CustomFunctionHost): Promise<void> {
  const shown = shownBy(book);
  book.recalculate();
  await book.whenIdle();
  same("a full recalculation", shownBy(book), shown, !shown.includes("#SPILL!"));
  const file: unknown = JSON.parse(JSON.stringify(book.toJSON()));
  const opened = Book.fromJSON(file, { functions, now: () => new Date(2026, 0, 1), random: () => 0.5 });
  await opened.whenIdle();
  same("the saved form, opened and saved", saved(opened), saved(book));
  const last = saved(book);
  let taken = 0;
  while (book.undo()) taken++;
  same("undoing everything", saved(book), empty);
  for (; taken > 0; taken--) book.redo();
  same("doing everything again", saved(book), last);
}

/** The saved form; cells are kept in the order in which they were filled, which is of no account here. */
const saved = (book: Book): string => JSON.stringify(book.toJSON(), (_, value: unknown) => (Array.isArray(value) && value.every(Array.isArray) ? [...value].sort((a, b) => (JSON.stringify(a) < JSON.stringify(b) ? -1 : 1)) : value));

function shownBy(book: Book): string {
  const cells = book.sheets().map(({ id, name }) => [name, ...Array.from({ length: 400 }, (_, at) => book.view(id, Math.floor(at / 20), at % 20).value)]);
  return JSON.stringify(cells);
}

/** Where two spills want the same cells the order of edits decides, so such workbooks may differ after a full recalculation. */
function same(what: string, found: string, expected: string, decided = true): void {
  if (!decided || found === expected) return;
  let at = 0;
  while (found[at] === expected[at]) at++;
  throw new Error(`After ${what}: …${found.slice(Math.max(0, at - 60), at + 60)}… instead of …${expected.slice(Math.max(0, at - 60), at + 60)}…`);
}
