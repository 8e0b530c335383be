/** Whether a number format shows its value times 100 with a percent sign. */
export function isPercentFormat(format: string | undefined): boolean {
  return format !== undefined && /%/u.test(format.replace(/"[^"]*"|\\./gu, ""));
}
