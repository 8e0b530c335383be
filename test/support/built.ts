import { buildIfStale } from "../../scripts/build.mjs";

/** Runs once before the tests of the built site: they never see a site older than its sources. */
export default async function setup(): Promise<void> {
  await buildIfStale();
}
