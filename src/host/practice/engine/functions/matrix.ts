/** The few matrix operations that ordinary formulas know, on plain rows. */

export function product(left: readonly (readonly number[])[], right: readonly (readonly number[])[]): number[][] {
  return left.map((row) => right[0]!.map((_, column) => row.reduce((sum, entry, index) => sum + entry * right[index]![column]!, 0)));
}

/**
 * Gauss-Jordan elimination with partial pivoting (Golub and Van Loan, Matrix Computations, 3.4): the inverse, null
 * when a pivot vanishes to rounding, and the determinant, 0 in that case.
 */
export function invert(matrix: readonly (readonly number[])[]): { inverse: number[][] | null; determinant: number } {
  const size = matrix.length;
  const rows = matrix.map((row, at) => [...row, ...row.map((_, column) => (column === at ? 1 : 0))]);
  const scale = matrix.reduce((most, row) => row.reduce((least, entry) => Math.max(least, Math.abs(entry)), most), 0);
  let determinant = 1;
  for (let step = 0; step < size; step++) {
    let pivot = step;
    for (let row = step + 1; row < size; row++) if (Math.abs(rows[row]![step]!) > Math.abs(rows[pivot]![step]!)) pivot = row;
    const value = rows[pivot]![step]!;
    determinant *= pivot === step ? value : -value;
    if (Math.abs(value) <= size * Number.EPSILON * scale) return { inverse: null, determinant: 0 };
    [rows[step], rows[pivot]] = [rows[pivot]!, rows[step]!];
    const line = rows[step]!.map((entry) => entry / value);
    rows[step] = line;
    for (let row = 0; row < size; row++) {
      const factor = rows[row]![step]!;
      if (row === step || factor === 0) continue;
      rows[row] = rows[row]!.map((entry, column) => entry - factor * line[column]!);
    }
  }
  return { inverse: rows.map((row) => row.slice(size)), determinant };
}
