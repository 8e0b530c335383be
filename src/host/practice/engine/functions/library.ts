/** The ordinary functions by name. */
import type { FunctionHelp } from "../completion";
import type { OrdinaryFunction } from "../evaluate";
import type { Definition } from "./define";
import { aggregates } from "./aggregates";
import { dates } from "./dates";
import { logic } from "./logic";
import { lookup } from "./lookup";
import { mathematics } from "./mathematics";
import { tables } from "./tables";
import { text } from "./text";

const all = new Map<string, Definition>([...aggregates, ...dates, ...logic, ...lookup, ...mathematics, ...tables, ...text].map((entry) => [entry.name, entry]));

export const ordinaryFunction = (name: string): OrdinaryFunction | null => all.get(name)?.body ?? null;

export const ordinaryDescriptions = (): FunctionHelp[] =>
  [...all.values()].map(({ name, parameters, description }) => ({
    name,
    arguments: parameters.map((entry) => ({ name: entry.name, optional: entry.optional, text: "" })),
    description,
    custom: false,
  }));
