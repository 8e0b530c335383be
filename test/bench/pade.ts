import { LuDecomposition, Matrix } from "ml-matrix";

const B = [
  64764752532480000, 32382376266240000, 7771770303897600, 1187353796428800, 129060195264000, 10559470521600, 670442572800,
  33522128640, 1323241920, 40840800, 960960, 16380, 182, 1,
];
const THETA = 5.371920351148152;

/**
 * exp of a general matrix as a library user would write it on ml-matrix: scaling and squaring with the [13/13] Padé approximant
 * (Higham, SIAM J. Matrix Anal. Appl. 26 (2005) 1179–1193, algorithm 2.3; its coefficients and θ₁₃). A rival in the benchmark.
 */
export function padeExponential(a: Matrix): Matrix {
  const n = a.rows;
  let norm = 0;
  for (let j = 0; j < n; j++) {
    let sum = 0;
    for (let i = 0; i < n; i++) sum += Math.abs(a.get(i, j));
    norm = Math.max(norm, sum);
  }
  const squarings = Math.max(0, Math.ceil(Math.log2(norm / THETA)));
  const x = Matrix.mul(a, 2 ** -squarings);
  const x2 = x.mmul(x);
  const x4 = x2.mmul(x2);
  const x6 = x4.mmul(x2);
  const identity = Matrix.eye(n);
  const sum = (c6: number, c4: number, c2: number, c0: number): Matrix =>
    Matrix.mul(x6, c6).add(Matrix.mul(x4, c4)).add(Matrix.mul(x2, c2)).add(Matrix.mul(identity, c0));
  const u = x.mmul(x6.mmul(sum(B[13], B[11], B[9], 0)).add(sum(B[7], B[5], B[3], B[1])));
  const v = x6.mmul(sum(B[12], B[10], B[8], 0)).add(sum(B[6], B[4], B[2], B[0]));
  let result = new LuDecomposition(Matrix.sub(v, u)).solve(Matrix.add(v, u));
  for (let s = 0; s < squarings; s++) result = result.mmul(result);
  return result;
}
