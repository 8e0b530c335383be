import { type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type Site } from "../support/browser";

let site: Site;
beforeAll(async () => {
  site = await openSite();
});
afterAll(() => site?.close());

const OFFICE = "https://appsforoffice.microsoft.com/lib/1/hosted/office.js";

/** Puts a script in the place of the host's; `null` is a host that cannot be reached. */
const withHost = (script: string | null) => async (page: Page) => {
  await page.addInitScript(() => {
    const refused: string[] = [];
    Object.assign(window, { refused });
    document.addEventListener("securitypolicyviolation", (event) => refused.push(`${event.violatedDirective} ${event.blockedURI}`));
  });
  await page.route(OFFICE, (route) => (script === null ? route.abort() : route.fulfill({ contentType: "text/javascript", body: script })));
};
const refusedBy = (page: Page) => page.evaluate(() => (window as unknown as { refused: string[] }).refused);

/** Enough of the host to get past its start: says which host it is, what it supports, and keeps the registered names. */
const office = (host: string | null, supported = true): string => `
  window.registered = [];
  window.CustomFunctions = { associate: (id) => registered.push(id), Error: class extends Error {}, ErrorCode: {} };
  window.Office = {
    HostType: { Excel: "Excel" },
    StartupBehavior: { load: "Load" },
    addin: { setStartupBehavior: (behaviour) => Promise.resolve(void (window.startup = behaviour)) },
    context: { requirements: { isSetSupported: () => ${supported} }, officeTheme: { bodyBackgroundColor: "#202020" } },
    onReady: () => { window.registeredBeforeReady = registered.length; return Promise.resolve({ host: ${JSON.stringify(host)} }); },
  };
  window.Excel = { run: () => Promise.reject(Object.assign(new Error("x"), { code: "AccessDenied" })) };`;

describe("every page", () => {
  it.each(["practice.html", "support.html", "privacy.html"])("%s asks nobody but its own address and breaks no rule of its policy", async (path) => {
    const { page, foreignRequests, errors, close } = await site.open({ path, before: withHost(null) });
    await page.waitForLoadState("networkidle");
    expect(await refusedBy(page)).toEqual([]);
    expect(foreignRequests).toEqual([]);
    expect(errors).toEqual([]);
    await close();
  });

  it("refuses a script from elsewhere, a script in the markup, and eval, but compiles WebAssembly", async () => {
    const { page, close } = await site.open({ before: withHost(null) });
    const outcome = await page.evaluate(async () => {
      const tried: Record<string, string> = {};
      const attempt = async (name: string, act: () => unknown) => {
        try {
          await act();
          tried[name] = "allowed";
        } catch {
          tried[name] = "refused";
        }
      };
      // In a task of its own: what the test itself evaluates is let past the policy.
      await attempt("eval", () => new Promise((resolve, reject) => setTimeout(() => { try { resolve((0, eval)("1")); } catch (error) { reject(error as Error); } })));
      await attempt("fetch", () => fetch("https://example.org/"));
      await attempt("wasm", () => WebAssembly.compile(new Uint8Array([0, 97, 115, 109, 1, 0, 0, 0])));
      const script = document.createElement("script");
      script.textContent = "window.ran = true";
      document.head.append(script);
      tried.inline = "ran" in window ? "allowed" : "refused";
      await attempt("foreign", () => {
        const foreign = document.createElement("script");
        return new Promise((resolve, reject) => {
          foreign.onload = resolve;
          foreign.onerror = reject;
          foreign.src = "https://example.org/x.js";
          document.head.append(foreign);
        });
      });
      return tried;
    });
    expect(outcome).toEqual({ eval: "refused", fetch: "refused", wasm: "allowed", inline: "refused", foreign: "refused" });
    await close();
  });
});

describe("the page for Excel", () => {
  const open = (script: string | null) => site.open({ path: "pane.html", before: withHost(script), viewport: { width: 350, height: 700 } });

  it("asks for the host's script and nothing else", async () => {
    const { page, foreignRequests, close } = await open(office("Excel"));
    await page.waitForLoadState("networkidle");
    expect(foreignRequests).toEqual([OFFICE]);
    expect(await refusedBy(page)).toEqual([]);
    await close();
  });

  it("registers the formulas before the host is ready, loads the pane after, and answers on opening from then on", async () => {
    const { page, errors, close } = await open(office("Excel"));
    const described = await page.evaluate(async () => ((await (await fetch("functions.json")).json()) as { functions: unknown[] }).functions.length);
    await page.locator("#pane.sr-pane").waitFor();
    const told = await page.evaluate(() => {
      const { registeredBeforeReady, startup } = window as unknown as { registeredBeforeReady: number; startup: string };
      return { registeredBeforeReady, startup };
    });
    expect(told).toEqual({ registeredBeforeReady: described, startup: "Load" });
    expect(errors).toEqual([]);
    await close();
  });

  it("registers the formulas all the same with a host that is ready for them late", async () => {
    const late = office("Excel").replace("window.CustomFunctions =", "window.late =").replace("onReady: () => {", "onReady: () => { window.CustomFunctions = late;");
    const { page, errors, close } = await open(late);
    await page.waitForFunction(() => (window as unknown as { registered: string[] }).registered.includes("TRANSITION"));
    expect(errors).toEqual([]);
    await close();
  });

  it.each([
    ["the host's script cannot be loaded", null, "Excel's script could not be loaded", "Check the connection"],
    ["it is opened outside Excel", office(null), "This page belongs in Excel", "open the practice workbook instead"],
    ["the host lacks what it needs", office("Excel", false), "This version of Excel is too old", "answers that fill several cells (ExcelApi 1.12)"],
  ])("says what to do when %s", async (_, script, heading, words) => {
    const { page, close } = await open(script);
    await page.getByRole("heading", { name: heading }).waitFor();
    expect(await page.locator("#pane").innerText()).toContain(words);
    expect(await page.locator(".sr-pane").count()).toBe(0);
    await close();
  });
});
