import { describe, expect, it } from "vitest";
import { browser, candidates, findBrowser } from "../../../scripts/browser.mjs";
import { openCommand } from "../../../scripts/open.mjs";

type Machine = Parameters<typeof browser>[0] & object;

/** A machine with these files; `onRun` sees each command and says whether it succeeds. */
function machine(changes: Partial<Machine> & { files?: string[]; onRun?: (line: string, files: Set<string>) => boolean }) {
  const files = new Set(changes.files ?? []);
  const said: string[] = [];
  const ran: string[] = [];
  const made: Machine = {
    platform: "linux",
    env: { PATH: "/usr/local/bin:/usr/bin" },
    isFile: (file) => files.has(file),
    isRoot: false,
    installed: () => (files.has("/own/chrome") ? "/own/chrome" : null),
    run(command, args) {
      const line = [command, ...args].join(" ");
      ran.push(line);
      return changes.onRun?.(line, files) ?? false;
    },
    say: (line) => said.push(line),
    ...changes,
  };
  return { made, said, ran };
}

describe("finding a browser", () => {
  it("looks in the places of each platform, Chromium first", () => {
    expect(findBrowser(machine({ files: ["/usr/bin/google-chrome", "/usr/bin/chromium"] }).made)).toBe("/usr/bin/chromium");
    const mac = { platform: "darwin" as const, env: { HOME: "/Users/a" } };
    expect(findBrowser(machine({ ...mac, files: ["/Applications/Google Chrome.app/Contents/MacOS/Google Chrome"] }).made)).toMatch(/Google Chrome$/);
    expect(findBrowser(machine({ ...mac, files: ["/Users/a/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge"] }).made)).toMatch(/Edge$/);
    const windows = { platform: "win32" as const, env: { PROGRAMFILES: "C:\\Program Files", "PROGRAMFILES(X86)": "C:\\Program Files (x86)" } };
    expect(findBrowser(machine({ ...windows, files: ["C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe"] }).made)).toMatch(/msedge\.exe$/);
    expect(candidates(windows)).toHaveLength(6);
  });

  it("takes the one that is named, and says so when it is not there", () => {
    expect(findBrowser(machine({ env: { STAYRATE_BROWSER: "/opt/b" }, files: ["/opt/b", "/usr/bin/chromium"] }).made)).toBe("/opt/b");
    expect(() => findBrowser(machine({ env: { STAYRATE_BROWSER: "/opt/b" } }).made)).toThrow(/STAYRATE_BROWSER is "\/opt\/b"/);
  });

  it("takes the test library's own when the machine has no other", () => {
    expect(findBrowser(machine({ files: ["/own/chrome"] }).made)).toBe("/own/chrome");
  });
});

describe("installing a browser", () => {
  it("installs Debian's package as root, refreshing the package lists when that is what it takes", () => {
    let updated = false;
    const { made, ran, said } = machine({
      isRoot: true,
      files: ["/usr/bin/apt-get"],
      onRun(line, files) {
        if (line.endsWith("update")) return (updated = true);
        if (updated) files.add("/usr/bin/chromium");
        return updated;
      },
    });
    expect(browser(made)).toBe("/usr/bin/chromium");
    expect(ran.map((line) => line.split(" ").at(-1))).toEqual(["chromium", "update", "chromium"]);
    expect(said).toEqual(["No Chromium, Chrome or Edge found: installing Debian's chromium."]);
  });

  it("asks the test library's installer elsewhere", () => {
    const { made, ran } = machine({ platform: "darwin", onRun: (_, files) => files.add("/own/chrome") !== null });
    expect(browser(made)).toBe("/own/chrome");
    expect(ran).toHaveLength(1);
    expect(ran[0]).toMatch(/playwright-core.cli\.js install chromium$/);
  });

  it("says in one sentence what to do when nothing helps", () => {
    const sentence = /none could be found or installed: run `sudo apt-get install chromium`, or set STAYRATE_BROWSER/;
    expect(() => browser(machine({ files: ["/usr/bin/apt-get"] }).made)).toThrow(sentence);
    expect(() => browser(machine({ platform: "win32", env: {} }).made)).toThrow(/install Chrome, Chromium or Edge, or set/);
  });
});

describe("opening the practice workbook", () => {
  it("uses the desktop's own command, and none where there is no desktop", () => {
    expect(openCommand("http://x/", "darwin", {})).toEqual(["open", ["http://x/"]]);
    expect(openCommand("http://x/", "win32", {})).toEqual(["cmd", ["/c", "start", "", "http://x/"]]);
    expect(openCommand("http://x/", "linux", { DISPLAY: ":0" })).toEqual(["xdg-open", ["http://x/"]]);
    expect(openCommand("http://x/", "linux", {})).toBeNull();
    expect(openCommand("http://x/", "darwin", { CI: "true" })).toBeNull();
  });
});
