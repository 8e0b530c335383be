import { EigenvalueDecomposition, LuDecomposition, Matrix } from "ml-matrix";

type Steps<T> = globalThis.Generator<number, T, void>;

/** Square roots are taken until the matrix is this near to I (1-norm); the quadrature then is exact to 4e-20. */
const NEAR_IDENTITY = 0.35;
/** More square roots than this are taken of no matrix with a logarithm in the double range. */
const MOST_ROOTS = 40;
/** The square root iteration converges quadratically once near; where there is no principal root it wanders. */
const MOST_ROUNDS = 50;

/**
 * Nodes and weights of the Gauss–Legendre rule of 10 points on [0, 1] (Abramowitz & Stegun, table 25.4, mapped from
 * [−1, 1]; recomputed to 20 digits).
 */
export const NODES: readonly number[] = [
  0.013046735741414139961, 0.067468316655507744634, 0.16029521585048779688, 0.2833023029353764046, 0.42556283050918439456,
  0.57443716949081560544, 0.7166976970646235954, 0.83970478414951220312, 0.93253168334449225537, 0.98695326425858586004,
];
export const WEIGHTS: readonly number[] = [
  0.033335672154344068797, 0.074725674575290296573, 0.109543181257991022, 0.13463335965499817755, 0.14776211235737643509,
  0.14776211235737643509, 0.13463335965499817755, 0.109543181257991022, 0.074725674575290296573, 0.033335672154344068797,
];

/** A candidate is the logarithm when its exponential gives the matrix back to this. */
const LARGEST_RESIDUAL = 1e-8;
/** One that gives it back to this is not improved on. */
const SMALL_RESIDUAL = 1e-13;
/** The residual is itself known to rounding only: the second candidate must be better by this factor. */
const CLEARLY_BETTER = 1 / 16;

/**
 * The principal logarithm of a real matrix of norm about 1, or null where it has none that is real: an eigenvalue on the
 * closed negative real axis, or so near to 0 that the matrix is singular to rounding.
 *
 * *Method*: inverse scaling and squaring; where that loses digits (eigenvalues of very different size), the eigenvectors give
 * a second candidate. Neither is trusted: the one whose exponential is nearer to the matrix is taken, and none
 * that misses it. So a matrix that cannot be diagonalised is never harmed by the attempt.
 */
export function* principalLogarithm(n: number, values: Float64Array): Steps<Float64Array | null> {
  const matrix = toMatrix(n, values);
  if (isSingular(matrix)) return null;
  let best: Matrix | null = null;
  let smallest = LARGEST_RESIDUAL;
  for (const candidate of [logarithmByRoots, logarithmByEigenvectors]) {
    const logarithm = yield* candidate(matrix);
    const residual = logarithm ? Matrix.sub(yield* exponential(logarithm), matrix).norm("max") : Infinity;
    if (residual < (best ? smallest * CLEARLY_BETTER : smallest)) {
      smallest = residual;
      best = logarithm;
    }
    if (smallest <= SMALL_RESIDUAL) break;
  }
  return best ? Float64Array.from(best.to1DArray()) : null;
}

/**
 * *Method*: inverse scaling and squaring (Kenney & Laub, SIAM J. Matrix Anal. Appl. 10 (1989) 191–209): square roots by the
 * scaled product form of the Denman–Beavers iteration until near I, then log(I + X) = ∫₀¹ X (I + sX)⁻¹ ds by Gauss's rule,
 * which is its diagonal Padé approximant in partial fractions (Dieci, Morini & Papini, SIMAX 17 (1996) 570–593). References
 * from memory. *Cost*: about 10 inverses a root, 10 solves at the end.
 */
export function* logarithmByRoots(matrix: Matrix): Steps<Matrix | null> {
  const identity = Matrix.eye(matrix.rows);
  let power = matrix;
  let roots = 0;
  for (; oneNorm(Matrix.sub(power, identity)) > NEAR_IDENTITY; roots++) {
    const root = roots < MOST_ROOTS ? yield* squareRoot(power) : null;
    if (!root) return null;
    power = root;
  }
  const x = Matrix.sub(power, identity);
  const sum = Matrix.zeros(matrix.rows, matrix.rows);
  for (let k = 0; k < NODES.length; k++) {
    const term = new LuDecomposition(Matrix.add(identity, Matrix.mul(x, NODES[k]))).solve(x);
    sum.add(Matrix.mul(term, WEIGHTS[k]));
    yield 0.3;
  }
  return sum.mul(2 ** roots);
}

/** V log(D) V⁻¹; null where an eigenvalue is not positive or the vectors do not span. */
export function* logarithmByEigenvectors(matrix: Matrix): Steps<Matrix | null> {
  const n = matrix.rows;
  const { realEigenvalues: re, imaginaryEigenvalues: im, eigenvectorMatrix: v } = new EigenvalueDecomposition(matrix);
  yield 0.7;
  const logD = Matrix.zeros(n, n);
  for (let k = 0; k < n; k++) {
    if (im[k] === 0 && !(re[k] > 0)) return null;
    logD.set(k, k, Math.log(Math.hypot(re[k], im[k])));
    // A pair a ± bi stands as the block [a, b; −b, a].
    if (im[k] > 0 && k + 1 < n) {
      const angle = Math.atan2(im[k], re[k]);
      logD.set(k, k + 1, angle);
      logD.set(k + 1, k, -angle);
    }
  }
  const lu = new LuDecomposition(v.transpose());
  if (lu.isSingular()) return null;
  return lu.solve(v.mmul(logD).transpose()).transpose();
}

/** Singular to rounding, by the pivots of elimination. */
function isSingular(matrix: Matrix): boolean {
  const upper = new LuDecomposition(matrix).upperTriangularMatrix;
  for (let i = 0; i < matrix.rows; i++) if (!(Math.abs(upper.get(i, i)) > matrix.rows * 2 ** -53)) return true;
  return false;
}

/** exp of a general matrix, for the check only: Taylor to degree 18 at norm ½, then squarings. Normwise accurate. */
function* exponential(matrix: Matrix): Steps<Matrix> {
  const norm = oneNorm(matrix);
  if (!Number.isFinite(norm)) return Matrix.zeros(matrix.rows, matrix.rows).fill(NaN);
  const squarings = Math.max(0, Math.ceil(Math.log2(norm)) + 1);
  const small = Matrix.mul(matrix, 2 ** -squarings);
  let term = Matrix.eye(matrix.rows);
  let sum = term.clone();
  for (let k = 1; k <= 18; k++) {
    term = term.mmul(small).mul(1 / k);
    sum.add(term);
    yield 0.5;
  }
  for (let s = 0; s < squarings; s++) {
    sum = sum.mmul(sum);
    yield 0.5;
  }
  return sum;
}

/** Principal square root; null where the iteration does not converge. */
function* squareRoot(matrix: Matrix): Steps<Matrix | null> {
  const n = matrix.rows;
  const identity = Matrix.eye(n);
  let product = matrix.clone();
  let root = matrix.clone();
  let before = Infinity;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const lu = new LuDecomposition(product);
    if (lu.isSingular()) return null;
    const inverted = lu.solve(identity);
    const far = oneNorm(Matrix.sub(product, identity));
    // Scaling by the determinant speeds the way in and is left off near the end, where it would disturb.
    const mu = far > 0.01 ? Math.exp(-logDeterminant(lu) / (2 * n)) : 1;
    root = root.mmul(Matrix.add(identity, Matrix.mul(inverted, 1 / (mu * mu)))).mul(mu / 2);
    product = Matrix.add(Matrix.mul(product, mu * mu), Matrix.mul(inverted, 1 / (mu * mu))).mul(0.25).add(Matrix.mul(identity, 0.5));
    const distance = oneNorm(Matrix.sub(product, identity));
    if (!Number.isFinite(distance)) return null;
    if (distance <= n * 1e-15 || (distance < 1e-8 && distance >= before / 2)) return root;
    before = distance;
    yield 0.5;
  }
  return null;
}

/** ln |det| from the factors: the determinant itself may leave the double range. */
function logDeterminant(lu: LuDecomposition): number {
  const upper = lu.upperTriangularMatrix;
  let sum = 0;
  for (let i = 0; i < upper.rows; i++) sum += Math.log(Math.abs(upper.get(i, i)));
  return sum;
}

function oneNorm(matrix: Matrix): number {
  let largest = 0;
  for (let j = 0; j < matrix.columns; j++) {
    let sum = 0;
    for (let i = 0; i < matrix.rows; i++) sum += Math.abs(matrix.get(i, j));
    largest = Math.max(largest, sum);
  }
  return largest;
}

function toMatrix(n: number, values: Float64Array): Matrix {
  return Matrix.from1DArray(n, n, values);
}
