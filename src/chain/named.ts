import type { Generator } from "./generator";

/** A chain with the names of its states; null where it has none. */
export interface Named {
  readonly generator: Generator;
  readonly names: readonly string[] | null;
}

/** What a builder returns: every state has a name. */
export interface Built extends Named {
  readonly names: readonly string[];
}

/** The name of a state (from 0); "State 1" stands for the first of a chain without names. */
export function nameOf(names: readonly string[] | null, state: number): string {
  return names?.[state] ?? `State ${state + 1}`;
}

export function namesOf({ generator, names }: Named): readonly string[] {
  return Array.from({ length: generator.size }, (_, state) => nameOf(names, state));
}
