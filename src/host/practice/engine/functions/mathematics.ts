import type { Definition } from "./define";
export const mathematics: readonly Definition[] = [];
