/**
 * The nearest generator row in least squares: off-diagonal entries ≥ 0, sum 0. Changes `row` in place.
 *
 * *Method*: quasi-optimisation of the generator (Kreinin & Sidelnikova, Algo Research Quarterly 4 (2001) 23–40, from memory): the
 * projection onto the cone is b_j = max(a_j − λ, 0) off the diagonal and b_i = a_i − λ on it, with the λ that makes the sum 0.
 * It is found exactly by taking the off-diagonal entries in falling order.
 */
export function projectOntoGeneratorRow(row: Float64Array, diagonal: number): void {
  const others = Array.from(row.keys()).filter((j) => j !== diagonal);
  others.sort((a, b) => row[b] - row[a]);
  // With the m largest kept: a_i − λ + Σ (a_j − λ) = 0, so λ = (a_i + Σ a_j) / (m + 1); right when the next is not above λ.
  let sum = row[diagonal];
  let kept = 0;
  let lambda = sum;
  while (kept < others.length && row[others[kept]] > lambda) {
    sum += row[others[kept++]];
    lambda = sum / (kept + 1);
  }
  let exit = 0;
  for (const j of others) exit += row[j] = Math.max(row[j] - lambda, 0);
  row[diagonal] = 0 - exit;
}
