import { Generator, type Arrow } from "./generator";
import { nameOf, type Built, type Named } from "./named";

/**
 * Two independent chains seen as one.
 *
 * Rate (a, b)→(a', b) = rate a→a' of A, rate (a, b)→(a, b') = rate b→b' of B.
 *
 * @param a - first chain; its state varies slowest
 * @param b - second chain
 * @returns size A × size B states, names joined by " + "
 *
 * *Method*: Kronecker sum (common practice).
 *
 * @example combine({ generator: Generator.fromArrows(1, []), names: ["up"] }, { generator: Generator.fromArrows(1, []), names: null }).names
 * // ["up + State 1"]
 */
export function combine(a: Named, b: Named): Built {
  const [m, n] = [a.generator.size, b.generator.size];
  const arrows: Arrow[] = [];
  for (const [from, to, rate] of a.generator.arrows())
    for (let j = 0; j < n; j++) arrows.push([from * n + j, to * n + j, rate]);
  for (const [from, to, rate] of b.generator.arrows())
    for (let i = 0; i < m; i++) arrows.push([i * n + from, i * n + to, rate]);
  return {
    generator: Generator.fromArrows(m * n, arrows),
    names: Array.from({ length: m * n }, (_, s) => `${nameOf(a.names, Math.floor(s / n))} + ${nameOf(b.names, s % n)}`),
  };
}
