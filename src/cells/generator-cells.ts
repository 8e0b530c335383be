import type { Generator } from "../chain/generator";

/** The n × n table of a chain, row-major, its diagonal worked out as minus the exits. */
export function generatorValues(generator: Generator): Float64Array {
  const n = generator.size;
  const values = new Float64Array(n * n);
  for (const [from, to, rate] of generator.arrows()) values[from * n + to] = rate;
  for (let i = 0; i < n; i++) values[i * n + i] = -generator.exitRate[i];
  return values;
}
