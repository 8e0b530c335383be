import { checkSpill, refusal, type Answer, type AnswerCell, type Refusal } from "../cells/answer";
import type { Argument } from "../cells/argument";
import { Problem } from "../chain/problem";
import { finish, settle, type Steps } from "../chain/steps";
import type { CellValue } from "../table/rate-table";
import { Aside, answerOrders, AsideFailed, IS_WORKER } from "./aside";
import { Asked, cache } from "./asking";
import { bytesOf, digestOf, sameArguments } from "./digest";
import { Stop } from "./stop";

/**
 * Between the host and the functions: the only file that names the host's `CustomFunctions`.
 *
 * In: scalars become ranges of one cell, error values become `CellFault`, what is left out becomes null. Out: plain
 * arrays without NaN, infinities or undefined; a refusal becomes the host's error with its sentence, in its own cell where
 * the rest of a spill stands. Answers are kept by a digest of the arguments. Work beyond a quarter of a second goes on in
 * a worker that runs this same script, or in slices where there is none.
 */

/**
 * How long a call may hold the sheet before it answers with a promise, and how long each later slice may. While longer work
 * is under way a call gets no more than a slice: twenty such formulas at once must not add up to the host's five seconds.
 */
const BUDGET_MS = 250;
const SLICE_MS = 40;

/** A function of a section's file: takes `Argument`s, returns cells or an `Asked`. Typed as the host's metadata wants it. */
export type CellFunction = (...args: any[]) => any;

interface Invocation {
  onCanceled?: () => void;
}

type Found = Answer | AnswerCell;
type HostCell = number | string | boolean | CustomFunctions.Error;
type HostResult = HostCell | HostCell[][];

interface InFlight {
  readonly args: readonly Argument[];
  readonly promise: Promise<Found>;
  readonly stop: Stop;
  waiting: number;
}

const aside = new Aside();
const inFlight = new Map<string, InFlight>();

/** Registers every function with the host at once; in the worker, answers the page's orders instead. */
export function register(functions: Readonly<Record<string, CellFunction>>): void {
  if (typeof CustomFunctions !== "undefined") {
    for (const [id, body] of Object.entries(functions)) CustomFunctions.associate(id, (...given: unknown[]) => call(id, body, given));
  } else if (IS_WORKER) {
    answerOrders(({ number, id, args }) => {
      try {
        return { number, answer: finish(stepsOf(functions[id], args)) };
      } catch (problem) {
        return { number, refusal: refusalOf(problem) };
      }
    });
  }
}

/** One call by the host: the answer or a promise of it; throws or rejects with the host's error and nothing else. */
function call(id: string, body: CellFunction, given: readonly unknown[]): HostResult | Promise<HostResult> {
  try {
    const { args, invocation } = decode(given, body.length);
    const found = answer(id, body, args, invocation);
    if (!(found instanceof Promise)) return encode(found);
    return found.then(encode).catch((problem: unknown) => Promise.reject(hostError(refusalOf(problem))));
  } catch (problem) {
    throw hostError(refusalOf(problem));
  }
}

function answer(id: string, body: CellFunction, args: readonly Argument[], invocation: Invocation | null): Found | Promise<Found> {
  const key = `${id} ${digestOf(...args)}`;
  const kept = cache.find(key, args) as { found: Found } | undefined;
  if (kept) return kept.found;
  const running = inFlight.get(key);
  if (running && sameArguments(running.args, args)) return join(key, running, invocation);

  const again = () => stepsOf(body, args);
  const steps = again();
  const budget = inFlight.size > 0 ? SLICE_MS : BUDGET_MS;
  const now = work(steps, aside.available || typeof setTimeout === "function" ? budget : Infinity);
  if (now !== undefined) {
    keep(key, args, now);
    return now;
  }
  const stop = new Stop();
  const promise = later(id, args, steps, again, stop).finally(() => {
    if (inFlight.get(key)?.stop === stop) inFlight.delete(key);
  });
  promise.then((found) => keep(key, args, found)).catch(() => undefined);
  const flight: InFlight = { args, promise, stop, waiting: 0 };
  inFlight.set(key, flight);
  return join(key, flight, invocation);
}

/** Works for the budget; undefined when that was not enough. Where nothing can run in between, all is done at once. */
function work(steps: Steps<Found>, budget: number): Found | undefined {
  const end = Date.now() + budget;
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
    if (Date.now() >= end) return undefined;
  }
}

/** What was begun here goes on here in slices, or is done anew in the worker where there is one. */
async function later(id: string, args: readonly Argument[], begun: Steps<Found>, again: () => Steps<Found>, stop: Stop): Promise<Found> {
  if (!aside.available) return settle(begun, { budgetMs: 0, sliceMs: SLICE_MS, signal: stop });
  begun.return([]);
  try {
    const delivery = await aside.order(id, args, stop);
    if (delivery.refusal) throw new Refused(delivery.refusal);
    return delivery.answer!;
  } catch (failure) {
    if (!(failure instanceof AsideFailed)) throw failure;
    return settle(again(), { budgetMs: 0, sliceMs: SLICE_MS, signal: stop });
  }
}

function keep(key: string, args: readonly Argument[], found: Found): void {
  const bytes = args.reduce((sum, argument) => sum + bytesOf(argument), 0) + bytesOf(Array.isArray(found) ? found : null);
  cache.keep(key, args, { found }, bytes);
}

/** Several cells may wait for one answer; the work stops when the last of them no longer does. */
function join(key: string, flight: InFlight, invocation: Invocation | null): Promise<Found> {
  flight.waiting++;
  if (invocation)
    invocation.onCanceled = () => {
      if (--flight.waiting > 0) return;
      if (inFlight.get(key) === flight) inFlight.delete(key);
      flight.stop.request(new Problem("cancelled", {}, "noAnswer"));
    };
  return flight.promise;
}

function* stepsOf(body: CellFunction, args: readonly Argument[]): Steps<Found> {
  const found: unknown = body(...args);
  return found instanceof Asked ? yield* found.steps : (found as Found);
}

/** A refusal that the worker has worded. */
class Refused extends Error {
  constructor(readonly refusal: Refusal) {
    super(refusal.sentence);
  }
}

function refusalOf(problem: unknown): Refusal {
  if (problem instanceof Refused) return problem.refusal;
  if (problem instanceof Problem) return refusal(problem);
  if (problem instanceof RangeError) return refusal(new Problem("beyondMemory", {}));
  return refusal(new Problem("unexpected", { found: problem instanceof Error ? problem.message : String(problem) }));
}

/** The host passes its invocation object behind the declared arguments, whether or not a function wants it. */
function decode(given: readonly unknown[], count: number): { args: Argument[]; invocation: Invocation | null } {
  const args = Array.from({ length: count }, (_, k) => argumentOf(given[k]));
  return { args, invocation: given.find(isInvocation) ?? null };
}

function isInvocation(given: unknown): given is Invocation {
  return typeof given === "object" && given !== null && !Array.isArray(given) && faultOf(given) === null;
}

function argumentOf(given: unknown): Argument {
  if (given === null || given === undefined || isInvocation(given)) return null;
  if (!Array.isArray(given)) return [[cellOf(given)]];
  if (!Array.isArray(given[0])) return [given.map(cellOf)];
  let last: CellValue[] = [];
  return (given as unknown[][]).map((row) => (isRepeated(row, last) ? last : (last = row.map(cellOf))));
}

/** Whole columns end in a million blank rows: equal ones of those share one array, which the digest takes at a stride. */
function isRepeated(row: readonly unknown[], last: readonly CellValue[]): boolean {
  if (row.length !== last.length || (last[0] !== "" && last[0] !== 0)) return false;
  for (let k = 0; k < row.length; k++) if (last[k] !== last[0] || (row[k] ?? "") !== last[0]) return false;
  return true;
}

function cellOf(value: unknown): CellValue {
  if (typeof value === "number") return Number.isFinite(value) ? value : { fault: "#NUM!" };
  if (typeof value === "string" || typeof value === "boolean") return value;
  if (value === null || value === undefined) return "";
  return { fault: faultOf(value) ?? "#VALUE!" };
}

/** The code of an error value, such as "#DIV/0!"; hosts differ in whether they send the code or its name. */
function faultOf(value: unknown): string | null {
  if (typeof value !== "object" || value === null || !("code" in value)) return null;
  const code = String(value.code);
  return code.startsWith("#") ? code : (FAULTS[code] ?? `#${code.toUpperCase()}`);
}

const FAULTS: Readonly<Record<string, string>> = {
  divisionByZero: "#DIV/0!",
  invalidName: "#NAME?",
  invalidNumber: "#NUM!",
  invalidReference: "#REF!",
  invalidValue: "#VALUE!",
  notAvailable: "#N/A",
  nullReference: "#NULL!",
};

function encode(found: Found): HostResult {
  if (!Array.isArray(found)) return single(found);
  checkSpill(found.length, found[0]?.length ?? 0);
  return found.map((row) => row.map(hostCell));
}

/** A function of one value refuses by throwing: that is how its text reaches the cell on every host. */
function single(cell: AnswerCell): HostCell {
  const sealed = sealedCell(cell);
  if (typeof sealed === "object") throw new Refused(sealed);
  return sealed;
}

function hostCell(cell: AnswerCell): HostCell {
  const sealed = sealedCell(cell);
  return typeof sealed === "object" ? hostError(sealed) : sealed;
}

/** The last guard: no infinity, undefined number or minus zero reaches a sheet. */
function sealedCell(cell: AnswerCell): AnswerCell {
  if (typeof cell !== "number") return cell;
  return Number.isFinite(cell) ? cell + 0 : refusal(new Problem("valueLost", {}, "noAnswer"));
}

function hostError({ refusal: kind, sentence }: Refusal): CustomFunctions.Error {
  const { ErrorCode } = CustomFunctions;
  return new CustomFunctions.Error(kind === "input" ? ErrorCode.invalidValue : ErrorCode.notAvailable, sentence);
}
