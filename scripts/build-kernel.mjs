// Builds src/numerics/kernel.wat into src/numerics/kernel-bytes.ts: node scripts/build-kernel.mjs
import { readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath, pathToFileURL } from "node:url";
import wabt from "wabt";

const source = fileURLToPath(new URL("../src/numerics/kernel.wat", import.meta.url));
const target = fileURLToPath(new URL("../src/numerics/kernel-bytes.ts", import.meta.url));

/** The text of kernel-bytes.ts for the present kernel.wat. */
export async function kernelBytesText() {
  const { parseWat } = await wabt();
  const module = parseWat("kernel.wat", readFileSync(source, "utf8"), { simd: true });
  module.resolveNames();
  module.validate();
  const { buffer } = module.toBinary({});
  module.destroy();
  const lines = Buffer.from(buffer).toString("hex").match(/.{1,120}/g) ?? [];
  return `/** kernel.wat in binary form, ${buffer.length} bytes. Built by scripts/build-kernel.mjs; not to be edited. */
export const KERNEL_HEX =
${lines.map((line) => `  "${line}"`).join(" +\n")};
`;
}

if (import.meta.url === pathToFileURL(process.argv[1]).href) {
  writeFileSync(target, await kernelBytesText());
}
