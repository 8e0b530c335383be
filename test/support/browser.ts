import { chromium, type Browser, type BrowserContext, type BrowserContextOptions, type Page } from "playwright-core";
import { browser as browserProgram, QUIET_FLAGS } from "../../scripts/browser.mjs";
import { serve } from "../../scripts/serve.mjs";

export interface OpenOptions extends BrowserContextOptions {
  /** The page of the built site to open, with a query if need be. */
  readonly path?: string;
  /** Prepare the page before it loads: routes, scripts that stand in for the host. */
  readonly before?: (page: Page) => Promise<void>;
}

export interface OpenPage {
  readonly page: Page;
  readonly context: BrowserContext;
  /** Every request the page made to another origin than its own. */
  readonly foreignRequests: readonly string[];
  /** Uncaught errors and console errors of the page, refusals by the content policy among them. */
  readonly errors: readonly string[];
  close(): Promise<void>;
}

/** The built site on a free port and a browser to look at it with; a test file opens one and closes it at the end. */
export interface Site {
  readonly url: string;
  open(options?: OpenOptions): Promise<OpenPage>;
  close(): Promise<void>;
}

/** Serves dist/ and launches the browser found on this machine. Each `open` is a fresh profile: nothing stored before. */
export async function openSite(): Promise<Site> {
  const server = await serve();
  let launched: Browser;
  try {
    launched = await chromium.launch({ executablePath: browserProgram(), args: QUIET_FLAGS, timeout: 180_000 });
  } catch (error) {
    await server.close();
    throw error;
  }
  return {
    url: server.url,
    async open({ path = "practice.html", before, ...options } = {}) {
      const context = await launched.newContext({ viewport: { width: 1280, height: 800 }, locale: "en-GB", ...options });
      // A condition that is waited for may be long in coming on a busy machine; the test's own limit ends it.
      context.setDefaultTimeout(120_000);
      const page = await context.newPage();
      const foreignRequests: string[] = [];
      const errors: string[] = [];
      page.on("request", (request) => {
        if (!request.url().startsWith(server.url) && !/^(data|blob):/.test(request.url())) foreignRequests.push(request.url());
      });
      page.on("pageerror", (error) => errors.push(String(error)));
      page.on("console", (message) => {
        if (message.type() === "error") errors.push(message.text());
      });
      await before?.(page);
      await page.goto(server.url + path);
      return { page, context, foreignRequests, errors, close: () => context.close() };
    },
    async close() {
      await launched.close();
      await server.close();
    },
  };
}
