import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { contentPolicy } from "../../../scripts/policy.mjs";
import { serve } from "../../../scripts/serve.mjs";

let root: string;
beforeAll(() => {
  root = mkdtempSync(path.join(tmpdir(), "stayrate-serve-"));
  for (const name of ["practice.html", "pane.html"]) writeFileSync(path.join(root, name), `<title>${name}</title>`);
  writeFileSync(path.join(root, "functions.json"), "{}");
});
afterAll(() => rmSync(root, { recursive: true, force: true }));

describe("the local server", () => {
  it("serves on this machine only and leads the bare address to the practice workbook", async () => {
    const server = await serve({ root });
    expect(server.url).toBe(`http://127.0.0.1:${server.port}/`);
    const answer = await fetch(server.url);
    expect(answer.url).toBe(`${server.url}practice.html`);
    expect(await answer.text()).toContain("practice.html");
    expect((await fetch(`${server.url}missing.js`)).status).toBe(404);
    expect((await fetch(`${server.url}..%2f..%2fetc/passwd`)).status).toBe(404);
    await server.close();
  });

  it("sends each page's policy, and lets only the pane be framed", async () => {
    const server = await serve({ root });
    const policyOf = async (name: string) => (await fetch(server.url + name)).headers.get("content-security-policy");
    expect(await policyOf("practice.html")).toBe(`${contentPolicy({ hostScript: false })}; frame-ancestors 'none'`);
    expect(await policyOf("pane.html")).toBe(contentPolicy({ hostScript: true }));
    expect(await policyOf("functions.json")).toBeNull();
    await server.close();
  });

  it("takes the next free port when its own is taken, and gives up after the tries it has", async () => {
    const first = await serve({ root });
    const second = await serve({ root, port: first.port });
    expect(second.port).toBeGreaterThan(first.port);
    await expect(serve({ root, port: first.port, tries: 1 })).rejects.toThrow(`No port from ${first.port} to ${first.port} is free (EADDRINUSE). Choose another with --port.`);
    await first.close();
    await second.close();
  });

  it("looks no further than the last port there is", async () => {
    // Whether or not another program holds it, so that the second call finds it taken.
    const held = await serve({ root, port: 65535 }).catch(() => null);
    await expect(serve({ root, port: 65535 })).rejects.toThrow("No port from 65535 to 65535 is free");
    await held?.close();
  });
});

describe("the content policy", () => {
  it("allows no unsafe source but the compiling of WebAssembly", () => {
    for (const hostScript of [true, false]) {
      const policy = contentPolicy({ hostScript });
      expect(policy.match(/'unsafe-[a-z]+'/g)).toBeNull();
      expect(policy.match(/'[a-z-]*unsafe[a-z-]*'/g)).toEqual(["'wasm-unsafe-eval'"]);
      expect(policy.includes("https:")).toBe(hostScript);
    }
  });
});
