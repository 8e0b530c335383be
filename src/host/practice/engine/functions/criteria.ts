/** Criteria such as ">=5", "<>", "Run*" of the ...IF functions (OpenFormula 1.3 part 4, 4.11.8). */
import { readEntry } from "../entry";
import type { Locale } from "../locale";
import { compare, Fault, type Scalar } from "../value";

/** A pattern with * for any text, ? for any letter and ~ before a literal one, as a test of the whole text. */
export function wildcard(pattern: string): RegExp {
  const body = pattern.replace(/~([*?~])|([*?])|([\\^$.|+()[\]{}/])/g, (_, literal: string | undefined, wild: string | undefined, special: string | undefined) =>
    literal === "~" ? "~" : literal !== undefined ? `\\${literal}` : wild === "*" ? "[^]*" : wild === "?" ? "[^]" : `\\${special}`,
  );
  return new RegExp(`^${body}$`, "iu");
}

export function criterion(wanted: Scalar, locale: Locale): (value: Scalar) => boolean {
  if (typeof wanted !== "string") {
    if (wanted instanceof Fault) return (value) => value instanceof Fault && value.code === wanted.code;
    const target = wanted ?? 0;
    return (value) => typeof value === typeof target && value === target;
  }
  const [, sign = "", operand = ""] = /^(<=|>=|<>|<|>|=)?([^]*)$/.exec(wanted)!;
  const target = readEntry(operand, locale).value;
  if (sign === "" || sign === "=" || sign === "<>") {
    const same = equality(operand, target, sign);
    return sign === "<>" ? (value) => !same(value) : same;
  }
  return (value) => {
    if (value === null || value instanceof Fault || target instanceof Fault || target === null || typeof value !== typeof target) return false;
    const order = compare(value, target);
    return sign === "<" ? order < 0 : sign === ">" ? order > 0 : sign === "<=" ? order <= 0 : order >= 0;
  };
}

function equality(operand: string, target: Scalar, sign: string): (value: Scalar) => boolean {
  if (operand === "") return sign === "" ? (value) => value === null || value === "" : (value) => value === null;
  if (target instanceof Fault) return (value) => value instanceof Fault && value.code === target.code;
  if (typeof target === "string") {
    const pattern = wildcard(operand);
    return (value) => typeof value === "string" && pattern.test(value);
  }
  return (value) => value === target || (typeof target === "number" && typeof value === "string" && value === operand);
}
