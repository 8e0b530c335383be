/** `npm run icons`: draws the PNG icons of the add-in from assets/icons/*.svg, at every size the host may ask for. */
import { readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { chromium } from "playwright-core";
import { browser, QUIET_FLAGS } from "./browser.mjs";
import { ROOT } from "./paths.mjs";

export const ICON_SIZES = [16, 20, 24, 32, 40, 48, 64, 80];
const folder = path.join(ROOT, "assets/icons");
const drawing = (/** @type {number} */ size) => readFileSync(path.join(folder, size <= 24 ? "mark-small.svg" : "mark.svg"), "utf8");

const launched = await chromium.launch({ executablePath: browser(), args: QUIET_FLAGS });
try {
  const page = await launched.newPage({ deviceScaleFactor: 1 });
  for (const size of ICON_SIZES) {
    await page.setViewportSize({ width: size, height: size });
    await page.setContent(`<style>html,body{margin:0;background:transparent}svg{display:block;width:${size}px;height:${size}px}</style>${drawing(size)}`);
    const file = path.join(folder, `stayrate-${size}.png`);
    writeFileSync(file, await page.screenshot({ omitBackground: true, clip: { x: 0, y: 0, width: size, height: size } }));
    console.log(path.relative(ROOT, file));
  }
} finally {
  await launched.close();
}
