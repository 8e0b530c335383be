import { type Page } from "playwright-core";
import { afterAll, beforeAll, expect, it } from "vitest";
import { openSite, type Site } from "../support/browser";

let site: Site;
beforeAll(async () => {
  site = await openSite();
});
afterAll(() => site?.close());

interface Watched {
  registered: Record<string, (...args: unknown[]) => number[][]>;
  modules: number[][];
  products: number;
}

/** Keeps the modules that the page compiles and counts the products they work out; `without` takes WebAssembly away instead. */
const watch = (without: boolean) => async (page: Page) => {
  await page.route("https://appsforoffice.microsoft.com/**", (route) =>
    route.fulfill({
      contentType: "text/javascript",
      body: "window.registered = {}; window.CustomFunctions = { associate: (id, body) => void (registered[id] = body), Error: class extends Error {}, ErrorCode: {} };",
    }),
  );
  await page.addInitScript((takeAway) => {
    const watched: Pick<Watched, "modules" | "products"> & { refused: string[] } = { modules: [], products: 0, refused: [] };
    document.addEventListener("securitypolicyviolation", (event) => watched.refused.push(event.violatedDirective));
    Object.assign(window, { watched });
    if (takeAway) {
      Reflect.deleteProperty(window, "WebAssembly");
      return;
    }
    const { Module, Instance } = WebAssembly;
    WebAssembly.Module = class extends Module {
      constructor(bytes: BufferSource) {
        super(bytes);
        watched.modules.push([...(ArrayBuffer.isView(bytes) ? new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength) : new Uint8Array(bytes))]);
      }
    };
    WebAssembly.Instance = function (module: WebAssembly.Module, imports?: WebAssembly.Imports) {
      const { exports } = new Instance(module, imports);
      const multiply = exports.multiply as (...args: number[]) => void;
      return { exports: { ...exports, multiply: (...args: number[]) => void (watched.products++, multiply(...args)) } };
    } as unknown as typeof WebAssembly.Instance;
  }, without);
};

/** A ring of 40 states with a way back, every arrow a rate of its own: dense powers are the quick way to its answer. */
const transition = (page: Page) =>
  page.evaluate(() => {
    const n = 40;
    const rates = Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, j) => (i === j ? "" : (1 + ((7 * i + 13 * j) % 17)) / n)));
    const { registered, watched } = window as unknown as { registered: Watched["registered"]; watched: Watched & { refused: string[] } };
    const answer = registered.TRANSITION(rates, 3, null);
    return { answer, modules: watched.modules, products: watched.products, refused: watched.refused };
  });

it("works out dense powers with SIMD under the page's policy, and comes to the same without WebAssembly", async () => {
  const quick = await site.open({ path: "pane.html", before: watch(false) });
  const fast = await transition(quick.page);
  expect(fast.refused).toEqual([]);
  expect(fast.modules).toHaveLength(1);
  // 0xfd begins every SIMD instruction; "v128.load" and "f64x2.mul" are fd 00 and fd f2 01 (WebAssembly core specification 2.0, 5.4.8).
  const bytes = Buffer.from(fast.modules[0]);
  expect(bytes.includes(Buffer.from([0xfd, 0x00]))).toBe(true);
  expect(bytes.includes(Buffer.from([0xfd, 0xf2, 0x01]))).toBe(true);
  expect(fast.products).toBeGreaterThan(2);
  await quick.close();

  const plain = await site.open({ path: "pane.html", before: watch(true) });
  const slow = await transition(plain.page);
  expect(slow.modules).toEqual([]);
  let worst = 0;
  for (const [i, row] of fast.answer.entries()) for (const [j, value] of row.entries()) worst = Math.max(worst, Math.abs(value / slow.answer[i][j] - 1));
  // Two orders of summation of 40 terms over some ten squarings: measured 1e-15.
  expect(worst).toBeLessThan(1e-14);
  expect(fast.answer).toHaveLength(40);
  console.log(`worst relative difference of the two kernels: ${worst.toExponential(1)}`);
  await plain.close();
});
