/** Opens an address in the person's own browser, where there is one. */
import { spawn } from "node:child_process";

/**
 * The command that opens an address, or null where no desktop is there.
 * @param {string} url
 * @param {NodeJS.Platform} platform
 * @param {NodeJS.ProcessEnv} env
 * @returns {[string, string[]] | null}
 */
export function openCommand(url, platform = process.platform, env = process.env) {
  if (env.CI || env.SSH_CONNECTION) return null;
  if (platform === "darwin") return ["open", [url]];
  if (platform === "win32") return ["cmd", ["/c", "start", "", url]];
  return env.DISPLAY || env.WAYLAND_DISPLAY ? ["xdg-open", [url]] : null;
}

/** Tries to open; says nothing when it cannot, since the address is printed anyway. @param {string} url */
export function open(url) {
  const command = openCommand(url);
  if (!command) return;
  const child = spawn(command[0], command[1], { stdio: "ignore", detached: true });
  child.on("error", () => {});
  child.unref();
}
