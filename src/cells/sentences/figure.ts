/** A number inside a sentence: four significant digits at most, no trailing zeros, a true minus sign. */
export function figure(value: number): string {
  if (value === Infinity) return "no end";
  if (!Number.isFinite(value)) return "–";
  const short = Number(value.toPrecision(4));
  const size = Math.abs(short);
  const sign = short < 0 ? "−" : "";
  if (size !== 0 && (size < 1e-4 || size >= 1e6)) {
    const [digits, power] = size.toExponential().split("e");
    return `${sign}${digits}e${power.replace("+", "").replace("-", "−")}`;
  }
  return sign + String(size);
}

/** "A", "A and B", "A, B and 3 more": at most `most` names. */
export function listed(names: readonly string[], most = 3): string {
  if (names.length === 1) return names[0];
  if (names.length <= most) return `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
  return `${names.slice(0, most - 1).join(", ")} and ${names.length - most + 1} more`;
}

export function plural(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}
