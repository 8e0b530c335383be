/** Finds a browser that the tests can drive, or installs one. */
import { spawnSync } from "node:child_process";
import { accessSync, constants, existsSync } from "node:fs";
import { createRequire } from "node:module";
import path from "node:path";

/** Flags that make a browser quiet: no sandbox (tests run as root in containers), no request of its own. */
export const QUIET_FLAGS = [
  "--no-sandbox",
  "--disable-gpu",
  "--disable-background-networking",
  "--disable-component-update",
  "--disable-quic",
  "--no-first-run",
];

/**
 * What the search needs of the machine; tests replace it.
 * @typedef {{ platform: NodeJS.Platform, env: NodeJS.ProcessEnv, isFile(file: string): boolean, isRoot: boolean,
 *   installed(): string | null, run(command: string, args: string[]): boolean, say(line: string): void }} Machine
 */

/** @type {Machine} */
export const thisMachine = {
  platform: process.platform,
  env: process.env,
  isFile(file) {
    try {
      accessSync(file, process.platform === "win32" ? constants.F_OK : constants.X_OK);
      return true;
    } catch {
      return false;
    }
  },
  isRoot: process.getuid?.() === 0,
  installed() {
    const { chromium } = createRequire(import.meta.url)("playwright-core");
    const file = chromium.executablePath();
    return file && existsSync(file) ? file : null;
  },
  run: (command, args) => spawnSync(command, args, { stdio: "inherit", shell: false }).status === 0,
  say: (line) => console.log(line),
};

/**
 * Where browsers of the Chromium kind are kept, best first.
 * @param {Pick<Machine, "platform" | "env">} machine
 * @returns {string[]}
 */
export function candidates({ platform, env }) {
  if (platform === "win32") {
    const folders = [env.PROGRAMFILES, env["PROGRAMFILES(X86)"], env.LOCALAPPDATA].filter((one) => one !== undefined);
    const programs = ["Chromium\\Application\\chrome.exe", "Google\\Chrome\\Application\\chrome.exe", "Microsoft\\Edge\\Application\\msedge.exe"];
    return programs.flatMap((program) => folders.map((folder) => path.win32.join(folder, program)));
  }
  if (platform === "darwin") {
    const folders = ["/Applications", ...(env.HOME ? [`${env.HOME}/Applications`] : [])];
    return ["Chromium", "Google Chrome", "Microsoft Edge"].flatMap((name) => folders.map((folder) => `${folder}/${name}.app/Contents/MacOS/${name}`));
  }
  const names = ["chromium", "chromium-browser", "google-chrome-stable", "google-chrome", "microsoft-edge-stable", "microsoft-edge"];
  const folders = (env.PATH ?? "/usr/bin").split(":").filter(Boolean);
  return names.flatMap((name) => folders.map((folder) => path.posix.join(folder, name)));
}

/**
 * The executable of a browser on this machine, or null. The variable STAYRATE_BROWSER names one outright.
 * @param {Machine} [machine]
 * @returns {string | null}
 */
export function findBrowser(machine = thisMachine) {
  const named = machine.env.STAYRATE_BROWSER;
  if (named) {
    if (machine.isFile(named)) return named;
    throw new Error(`STAYRATE_BROWSER is "${named}", which is no program on this machine. Name a Chromium, Chrome or Edge, or unset it.`);
  }
  return candidates(machine).find((file) => machine.isFile(file)) ?? machine.installed();
}

/**
 * Finds a browser; where there is none, installs one: Debian's package as root, else by the test library's own installer.
 * @param {Machine} [machine]
 * @returns {string}
 * @throws with one sentence that says what to do
 */
export function browser(machine = thisMachine) {
  const found = findBrowser(machine);
  if (found) return found;
  const hasApt = machine.platform === "linux" && machine.isFile("/usr/bin/apt-get");
  if (hasApt && machine.isRoot) {
    machine.say("No Chromium, Chrome or Edge found: installing Debian's chromium.");
    const apt = ["-y", "-q", "--no-install-recommends", "install", "chromium"];
    if (machine.run("/usr/bin/apt-get", apt) || (machine.run("/usr/bin/apt-get", ["-q", "update"]) && machine.run("/usr/bin/apt-get", apt))) {
      const installed = findBrowser(machine);
      if (installed) return installed;
    }
  }
  machine.say("No Chromium, Chrome or Edge found: asking playwright-core to install one.");
  const cli = path.join(path.dirname(createRequire(import.meta.url).resolve("playwright-core/package.json")), "cli.js");
  if (machine.run(process.execPath, [cli, "install", "chromium"])) {
    const installed = findBrowser(machine);
    if (installed) return installed;
  }
  const advice = hasApt ? "run `sudo apt-get install chromium`" : "install Chrome, Chromium or Edge";
  throw new Error(`The browser tests need a browser and none could be found or installed: ${advice}, or set STAYRATE_BROWSER to one, and run the command again.`);
}
