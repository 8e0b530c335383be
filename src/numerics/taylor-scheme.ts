import { rowsBetweenPauses, UNPAUSED, type MatrixBlock } from "./matrix-kernel";

/**
 * A way to evaluate a polynomial of a matrix in few products, all of its coefficients non-negative:
 *
 *   y₀ = N,  y₁ = N²,  y_k = (Σ_i left_i y_i)(right₀ I + Σ_i right_(i+1) y_i),  T = sum₀ I + Σ_i sum_(i+1) y_i.
 *
 * T agrees with Σ N^k/k! up to `order`; its further coefficients (the degree is 2^products) lie between 0 and 2/k!, so they
 * lessen the truncation or at worst repeat it.
 */
export interface TaylorScheme {
  readonly order: number;
  readonly products: number;
  /** What is left out beyond the order, in terms of the first term there: Σ |1/k! − c_k| x^k ≤ omitted · x^(order+1)/(order+1)!. */
  readonly omitted: number;
  readonly factors: readonly (readonly [left: readonly number[], right: readonly number[]])[];
  readonly sum: readonly number[];
}

/**
 * *Method*: Paterson & Stockmeyer (SIAM J. Comput. 2 (1973) 60–66) reach order 9, 12, 16 in 4, 5, 6 products. Nested products
 * reach more (Bader, Blanes & Casas, Mathematics 7 (2019) 1174; Sastre, Linear Algebra Appl. 539 (2018) 229–250, both from
 * memory), but the published coefficients beyond order 8 have both signs, and one subtraction of large terms would cost the
 * small entries their digits. These are ours: least squares over the logarithms of the coefficients, which cannot leave the positive
 * numbers, from random starts; then as many as possible set to zero, refined to 60 digits, and the last bits
 * chosen so that each Taylor coefficient comes out within a rounding error (`test/unit/numerics/taylor-scheme.test.ts`
 * multiplies them out exactly). Order 15 in 4 products was not found.
 */
export const SCHEMES: readonly TaylorScheme[] = [
  { order: 2, products: 1, omitted: 1, factors: [], sum: [1, 1, 0.5] },
  { order: 4, products: 2, omitted: 1, factors: [[[0, 1], [0.5, 1 / 6, 1 / 24]]], sum: [1, 1, 0, 1] },
  {
    order: 8,
    products: 3,
    omitted: 1,
    factors: [
      [[0.5385108534511978, 0.13462771336279944], [1.4023812640575881, 0, 0.11686510533813235]],
      [[1.2555058426912584, 0, 0.9974920127805152], [0.6916241967002859, 0, 0.0922165595600381, 0.3663275728373365]],
    ],
    sum: [1, 0, 0.15714285714285714, 0.8197161581331958, 0.27419642788682064],
  },
  {
    order: 14,
    products: 4,
    omitted: 1,
    factors: [
      [[0.07479850864991895, 0.08139039759836054], [0.6228802239329043, 0, 0.03497216577150581]],
      [[0.61700241091104, 0, 0.21669963348748172], [0.5311729975003534, 0, 0.03082129635907378, 0.20336530108443313]],
      [
        [0, 0.04880353836911137, 0.6025480217841562, 0.7027188860118965],
        [0.6066518247091006, 0.11170999008199577, 0.023013357163462287, 0.14945981789812723, 0.14850804440319124],
      ],
    ],
    sum: [1, 0.24990737316737138, 0.04137284979463552, 0, 0, 4.716613041000523],
  },
  {
    order: 21,
    products: 5,
    omitted: 0.007,
    factors: [
      [[0.060771278803730996, 0.024749493542605337], [0, 0.23797834838009252, 0.01642435451553332]],
      [[0.3317275107055228, 0, 0.3610755534870274], [0.6964921598615144, 0.4311920155050384, 0.042548866143707634, 0.6341242801171809]],
      [
        [0.05239608999639474, 0, 0.278149101460107, 0.04026277585284858],
        [0, 0.31583216259612595, 0.03922015967745527, 0.22241894006457003, 0.020811902153041538],
      ],
      [
        [0, 0, 0, 6.423323650734717, 1.329969440189744],
        [0.25245206284367483, 0.0792634644229501, 0.009127115236615259, 0.21810715512380194, 0.02003248800980563, 0.11154030686065441],
      ],
    ],
    sum: [1, 0.6049108732414434, 0.0737985034676152, 1.6806129638132812, 0, 0.6462474181380791, 1.054529240868109],
  },
];

/** Slots that `taylorStart` needs: N, a result a product, two factors. */
export const TAYLOR_SLOTS = 8;

/** Terms of a combination without the zeros. */
interface Combination {
  readonly constant: number;
  readonly coefficients: readonly number[];
  readonly slots: readonly number[];
  /** The slot that the combination is, when it is just one of them. */
  readonly bare: number | null;
}

function combination(constant: number, coefficients: readonly number[]): Combination {
  const slots = Array.from(coefficients.keys()).filter((i) => coefficients[i] !== 0);
  const bare = constant === 0 && slots.length === 1 && coefficients[slots[0]] === 1 ? slots[0] : null;
  return { constant, coefficients: slots.map((i) => coefficients[i]), slots, bare };
}

const programs = new Map(
  SCHEMES.map(({ order, factors, sum }) => [
    order,
    {
      factors: factors.map(([left, right]) => [combination(0, left), combination(right[0], right.slice(1))] as const),
      sum: combination(sum[0], sum.slice(1)),
    },
  ]),
);

/**
 * P(h) = e^(−x) T(N), N in slot 0; the result is in the slot that is returned. All terms are non-negative, so every entry
 * keeps the relative accuracy of its largest terms.
 */
export function* taylorStart(block: MatrixBlock, order: number, x: number): globalThis.Generator<number, number, void> {
  const program = programs.get(order);
  if (!program) throw new RangeError(`no scheme of order ${order}`);
  const left = TAYLOR_SLOTS - 2;
  const right = TAYLOR_SLOTS - 1;
  const n = block.size;
  const rows = rowsBetweenPauses(n);
  const factors = program.factors;
  for (let product = 1; product <= factors.length + 1; product++) {
    let [one, other] = [0, 0];
    if (product > 1) {
      const [first, second] = factors[product - 2];
      [one, other] = [first.bare ?? left, right];
      if (first.bare === null) block.combine(left, 0, first.coefficients, first.slots);
      block.combine(right, second.constant, second.coefficients, second.slots);
    }
    for (let row = 0; row < n; row += rows) {
      block.multiply(product, one, other, row, Math.min(n, row + rows));
      if (n > UNPAUSED) yield 0;
    }
  }
  const scale = Math.exp(-x);
  const { constant, coefficients, slots } = program.sum;
  block.combine(left, scale * constant, coefficients.map((c) => scale * c), slots);
  return left;
}

/** e^(−x)/k! for k = 0 .. m. */
export function taylorCoefficients(degree: number, x: number): Float64Array {
  const c = new Float64Array(degree + 1);
  c[0] = Math.exp(-x);
  for (let k = 1; k <= degree; k++) c[k] = c[k - 1] / k;
  return c;
}
