import { fileURLToPath } from "node:url";
import path from "node:path";

/** The project's folder. */
export const ROOT = path.resolve(path.dirname(fileURLToPath(import.meta.url)), "..");
export const DIST = path.join(ROOT, "dist");
/** Derived files that are neither source nor site: build stamp, compiler state, test reports. */
export const CACHE = path.join(ROOT, ".cache");
