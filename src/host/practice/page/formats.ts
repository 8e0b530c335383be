/** The number formats that the page offers by name, and the number of decimals in a format code. */
export const NUMBER_STYLES = ["general", "fixed", "percent", "scientific", "date", "text"] as const;
export type NumberStyle = (typeof NUMBER_STYLES)[number];

const codes: Readonly<Record<NumberStyle, string>> = {
  general: "General",
  fixed: "0.000",
  percent: "0.0%",
  scientific: "0.00E+00",
  date: "yyyy-mm-dd",
  text: "@",
};

export function formatOf(style: NumberStyle): string {
  return codes[style];
}

/** Which of the named styles a code belongs to. */
export function styleOf(format: string): NumberStyle | null {
  if (format === "General") return "general";
  if (format === "@") return "text";
  if (/[ymdh]/i.test(format.replace(/"[^"]*"|\[[^\]]*\]/g, ""))) return "date";
  if (format.includes("%")) return "percent";
  if (/E[+-]/i.test(format)) return "scientific";
  return /^[#,]*0(\.0+)?$/.test(format) ? "fixed" : null;
}

const MOST_DECIMALS = 15;

/** The code with one decimal more or fewer; a general number starts from the decimals that it shows. */
export function withDecimals(format: string, by: 1 | -1, value: unknown): string {
  if (styleOf(format) === "general") return fixed(Math.max(0, Math.min(MOST_DECIMALS, shownDecimals(value) + by)));
  const match = /0(\.(0+))?/.exec(format);
  if (!match || styleOf(format) === "date" || styleOf(format) === "text") return format;
  const decimals = Math.max(0, Math.min(MOST_DECIMALS, (match[2]?.length ?? 0) + by));
  return format.slice(0, match.index) + fixed(decimals) + format.slice(match.index + match[0].length);
}

function fixed(decimals: number): string {
  return decimals === 0 ? "0" : `0.${"0".repeat(decimals)}`;
}

function shownDecimals(value: unknown): number {
  if (typeof value !== "number" || !Number.isFinite(value)) return 0;
  const text = String(Number(value.toPrecision(9)));
  return text.includes("e") ? 0 : (text.split(".")[1]?.length ?? 0);
}
