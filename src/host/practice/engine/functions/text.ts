/** Functions of text. */
import { numberInText } from "../entry";
import { formatValue } from "../number-format";
import { textOf } from "../operators";
import { Fault, toLogical, type Scalar } from "../value";
import { wildcard } from "./criteria";
import { asGrid, define, defineLifted, type Definition } from "./define";

const LONGEST = 32_767; // characters in a cell: ECMA-376 as applied by office programs (common practice)

const missing = (what: string, text: string): Fault => new Fault("#VALUE!", `"${what}" is not in "${text.length > 30 ? `${text.slice(0, 29)}…` : text}".`);
const fits = (text: string): string | Fault => (text.length > LONGEST ? new Fault("#VALUE!", `The text would have ${text.length} characters; ${LONGEST} is the limit.`) : text);

type Texts = readonly [string, string, string];

export const text: readonly Definition[] = [
  defineLifted("LEN", "text", "t", "How many characters a text has.", ([value]: readonly string[]) => value!.length),
  defineLifted("UPPER", "text", "t", "A text in capitals.", ([value]: readonly string[]) => value!.toUpperCase()),
  defineLifted("LOWER", "text", "t", "A text in small letters.", ([value]: readonly string[]) => value!.toLowerCase()),
  defineLifted("PROPER", "text", "t", "A text with a capital at each word.", ([value]: readonly string[]) => value!.toLowerCase().replace(/(^|[^\p{L}])(\p{L})/gu, (_, before: string, letter: string) => before + letter.toUpperCase())),
  defineLifted("TRIM", "text", "t", "A text without needless spaces.", ([value]: readonly string[]) => value!.replace(/ +/g, " ").replace(/^ | $/g, "")),
  defineLifted("CLEAN", "text", "t", "A text without unprintable characters.", ([value]: readonly string[]) => [...value!].filter((letter) => letter >= " ").join("")),
  defineLifted("LEFT", "text, [count]", "tn", "The first characters of a text.", ([value, count = 1]: readonly [string, number?]) => (count < 0 ? new Fault("#VALUE!") : value.slice(0, Math.trunc(count)))),
  defineLifted("RIGHT", "text, [count]", "tn", "The last characters of a text.", ([value, count = 1]: readonly [string, number?]) => (count < 0 ? new Fault("#VALUE!") : count < 1 ? "" : value.slice(-Math.trunc(count)))),
  defineLifted("MID", "text, start, count", "tnn", "Characters from within a text.", ([value, start, count]: readonly [string, number, number]) =>
    start < 1 || count < 0 ? new Fault("#VALUE!") : value.slice(Math.trunc(start) - 1, Math.trunc(start) - 1 + Math.trunc(count)),
  ),
  defineLifted("FIND", "part, text, [from]", "ttn", "Where a text stands within another; capitals matter.", ([part, value, from = 1]: readonly [string, string, number?]) => {
    const at = from < 1 ? -1 : value.indexOf(part, Math.trunc(from) - 1);
    return at < 0 ? missing(part, value) : at + 1;
  }),
  defineLifted("SEARCH", "part, text, [from]", "ttn", "Where a text stands within another; capitals do not matter, * and ? stand for anything.", ([part, value, from = 1]: readonly [string, string, number?]) => {
    const pattern = new RegExp(wildcard(part).source.slice(1, -1).replaceAll("[^]*", "[^]*?"), "iu");
    const at = from < 1 ? -1 : value.slice(Math.trunc(from) - 1).search(pattern);
    return at < 0 ? missing(part, value) : at + Math.trunc(from);
  }),
  defineLifted("SUBSTITUTE", "text, old, new, [which]", "tttn", "A text with a part of it replaced.", ([value, old, replacement, which]: readonly [...Texts, number?]) => {
    if (old === "") return value;
    if (which === undefined) return fits(value.replaceAll(old, () => replacement));
    let at = -1;
    for (let count = 0; count < Math.trunc(which); count++) {
      at = value.indexOf(old, at + 1);
      if (at < 0) return value;
    }
    return fits(value.slice(0, at) + replacement + value.slice(at + old.length));
  }),
  defineLifted("REPLACE", "text, start, count, new", "tnnt", "A text with characters at a place replaced.", ([value, start, count, replacement]: readonly [string, number, number, string]) =>
    start < 1 || count < 0 ? new Fault("#VALUE!") : fits(value.slice(0, Math.trunc(start) - 1) + replacement + value.slice(Math.trunc(start) - 1 + Math.trunc(count))),
  ),
  defineLifted("REPT", "text, times", "tn", "A text again and again.", ([value, times]: readonly [string, number]) =>
    times < 0 || value.length * times > LONGEST ? new Fault("#VALUE!", "The text would be too long, or the count is negative.") : value.repeat(Math.trunc(times)),
  ),
  defineLifted("EXACT", "first, second", "t", "TRUE when two texts are the same, capitals too.", ([first, second]: readonly string[]) => first === second),
  defineLifted("CHAR", "number", "n", "The character of a number.", ([number]: readonly number[]) => (number! >= 1 && number! < 256 ? String.fromCharCode(number!) : new Fault("#VALUE!"))),
  defineLifted("UNICHAR", "number", "n", "The character of a Unicode number.", ([number]: readonly number[]) =>
    number! >= 1 && number! <= 0x10ffff && !(number! >= 0xd800 && number! <= 0xdfff) ? String.fromCodePoint(Math.trunc(number!)) : new Fault("#VALUE!"),
  ),
  defineLifted("CODE", "text", "t", "The number of the first character.", ([value]: readonly string[]) => (value === "" ? new Fault("#VALUE!") : value!.charCodeAt(0))),
  defineLifted("UNICODE", "text", "t", "The Unicode number of the first character.", ([value]: readonly string[]) => value!.codePointAt(0) ?? new Fault("#VALUE!")),
  defineLifted("VALUE", "text", "v", "The number that a text stands for.", ([value]: readonly Scalar[], evaluation) => {
    if (typeof value !== "string") return typeof value === "boolean" ? new Fault("#VALUE!") : (value ?? 0);
    return numberInText(value, evaluation.sight.locale) ?? new Fault("#VALUE!", `"${value}" is no number.`);
  }),
  defineLifted("TEXT", "value, format", "vt", "A value written in a number format.", ([value, format]: readonly [Scalar, string], evaluation) => formatValue(value ?? 0, format, evaluation.sight.locale)),
  defineLifted("FIXED", "number, [digits], [no commas]", "nnl", "A number as text with fixed digits.", ([number, digits = 2, plain = false]: readonly [number, number?, boolean?], evaluation) => {
    const zeros = digits > 0 ? `.${"0".repeat(Math.min(Math.trunc(digits), 30))}` : "";
    return formatValue(number, `${plain ? "0" : "#,##0"}${zeros}`, evaluation.sight.locale);
  }),
  defineLifted("T", "value", "v", "A text, or an empty one for anything else.", ([value]: readonly Scalar[]) => (typeof value === "string" ? value : "")),
  define("CONCAT", "text, [more]...", "Joins texts and tables of texts.", (values, evaluation) => {
    let joined = "";
    for (const value of values) {
      for (const entry of asGrid(evaluation.read(value)).flat()) {
        if (entry instanceof Fault) return entry;
        joined += textOf(entry, evaluation.sight.locale);
      }
    }
    return fits(joined);
  }),
  defineLifted("CONCATENATE", "text, [more]...", "t", "Joins texts.", (values: readonly string[]) => fits(values.join(""))),
  define("TEXTJOIN", "between, skip blanks, text, [more]...", "Joins texts with a text between them.", (values, evaluation) => {
    const [between, skip] = values.slice(0, 2).map((value) => asGrid(evaluation.read(value))[0]![0]!);
    if (between instanceof Fault) return between;
    const skipping = toLogical(skip!);
    if (skipping instanceof Fault) return skipping;
    const parts: string[] = [];
    for (const value of values.slice(2)) {
      for (const entry of asGrid(evaluation.read(value)).flat()) {
        if (entry instanceof Fault) return entry;
        const part = textOf(entry, evaluation.sight.locale);
        if (!(skipping && part === "")) parts.push(part);
      }
    }
    return fits(parts.join(textOf(between!, evaluation.sight.locale)));
  }),
];
