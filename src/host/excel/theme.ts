/** The host's theme. Where the host gives none (Excel on the web, older versions) the system's preference decides. */

interface ThemeSource {
  readonly officeTheme?: { readonly bodyBackgroundColor?: string; readonly isDarkTheme?: boolean };
}

/** Light or dark, by the host's own word or by the brightness of its background; null when it says neither. */
export function themeOf({ officeTheme }: ThemeSource): "light" | "dark" | null {
  if (!officeTheme) return null;
  if (typeof officeTheme.isDarkTheme === "boolean") return officeTheme.isDarkTheme ? "dark" : "light";
  const match = /^#?([0-9a-f]{2})([0-9a-f]{2})([0-9a-f]{2})/i.exec(officeTheme.bodyBackgroundColor ?? "");
  if (!match) return null;
  const [red, green, blue] = match.slice(1).map((part) => parseInt(part, 16));
  // Luma of ITU-R BT.601, enough to tell a dark background from a light one.
  return 0.299 * red + 0.587 * green + 0.114 * blue < 128 ? "dark" : "light";
}

/** Sets the theme now and whenever the pane is looked at again, since the host tells of no change. */
export function followTheme(source: ThemeSource, set: (theme: "light" | "dark" | null) => void): void {
  set(themeOf(source));
  document.addEventListener("visibilitychange", () => set(themeOf(source)));
  window.addEventListener("focus", () => set(themeOf(source)));
}
