import { describe, expect, it } from "vitest";
import { certificate, plan, serveForExcel } from "../../../scripts/excel.mjs";

const tools = (command: string, platform: NodeJS.Platform) => {
  const made = plan(command, platform);
  return "refusal" in made ? made.refusal : made.fetched.map(([tool, verb]) => `${tool.split("@")[0]} ${verb}`);
};

describe("trying the add-in in Excel", () => {
  it.each(["win32", "darwin"] as const)("opens the desktop program on %s, with a certificate first", (platform) => {
    expect(tools("desktop", platform)).toEqual(["office-addin-dev-certs install", "office-addin-debugging start"]);
    expect(tools("stop", platform)).toEqual(["office-addin-debugging stop"]);
    expect(tools("web", platform)).toEqual(["office-addin-dev-certs install"]);
  });

  it("says on Linux what is possible and what is not", () => {
    expect(tools("desktop", "linux")).toMatch(/no Excel for this system's desktop.*excel:web.*npm start/);
    expect(tools("stop", "linux")).toMatch(/nothing to stop/);
    const web = plan("web", "linux");
    if ("refusal" in web) throw new Error(web.refusal);
    expect(web.words.join("\n")).toMatch(/Upload My Add-in[\s\S]*manifest\.xml[\s\S]*accept its certificate/);
  });

  it("names every tool with its version", () => {
    for (const platform of ["win32", "linux"] as const) {
      for (const command of ["desktop", "web", "stop"]) {
        const made = plan(command, platform);
        if (!("refusal" in made)) for (const [tool] of made.fetched) expect(tool).toMatch(/@\d+\.\d+\.\d+$/);
      }
    }
  });

  it("says so when the certificate is missing or is none", async () => {
    expect(() => certificate("/nowhere")).toThrow(/The development certificate is not in \/nowhere/);
    await expect(serveForExcel({ key: Buffer.from("x"), cert: Buffer.from("x") })).rejects.toThrow();
  });
});
