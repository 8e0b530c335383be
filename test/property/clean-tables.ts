import type { Cells, CellValue } from "../../src/table/rate-table";

/**
 * Rate tables without a mistake, as planners of different trades would keep them: a seeded stream for measuring how often the audit
 * complains without cause. Names and figures are invented; the shapes (queues, repair groups, degradation, safety rates, yearly
 * rates with hour-scale repair, cohorts, grades) are common practice.
 */
export interface CleanTable {
  readonly kind: string;
  readonly layout: string;
  readonly cells: Cells;
}

/** Mulberry32, public domain (T. Ettinger, 2017; constants from memory): only has to be repeatable. */
export function seeded(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

interface Chain {
  readonly kind: string;
  readonly names: readonly string[];
  /** Rates off the diagonal. */
  readonly rates: readonly (readonly number[])[];
  /** What a corner may say, apart from nothing and from/to. */
  readonly unit: string;
}

export function* cleanTables(count: number, seed: number): Generator<CleanTable> {
  const random = seeded(seed);
  const pick = <T>(items: readonly T[]): T => items[Math.floor(random() * items.length)];
  const whole = (low: number, high: number): number => low + Math.floor(random() * (high - low + 1));
  /** A typed figure between two sizes, log-uniform, with two or three digits, or as a quotient of two figures. */
  const figure = (low: number, high: number): number => {
    const value = low * (high / low) ** random();
    return random() < 0.2 ? value : Number(value.toPrecision(whole(1, 3)));
  };
  const table = (n: number, rate: (i: number, j: number) => number): number[][] =>
    Array.from({ length: n }, (_, i) => Array.from({ length: n }, (__, j) => (i === j ? 0 : rate(i, j))));

  const families: (() => Chain)[] = [
    () => {
      const places = whole(2, 14);
      const servers = whole(1, 4);
      const [arrival, service] = [figure(0.5, 60), figure(0.5, 40)];
      return {
        kind: "queue",
        names: Array.from({ length: places + 1 }, (_, k) => `${k} present`),
        rates: table(places + 1, (i, j) => (j === i + 1 ? arrival : j === i - 1 ? Math.min(i, servers) * service : 0)),
        unit: "per half hour",
      };
    },
    () => {
      const units = whole(2, 6);
      const crews = whole(1, units);
      const [fail, mend] = [figure(1e-4, 0.2), figure(0.05, 4)];
      const shared = random() < 0.4 ? figure(1e-6, 1e-3) : 0;
      const up = random() < 0.3;
      return {
        kind: "repair group",
        names: Array.from({ length: units + 1 }, (_, k) => (up ? `${units - k} up` : `${k} down`)),
        rates: table(units + 1, (i, j) => (j === i + 1 ? (units - i) * fail : j === i - 1 ? Math.min(i, crews) * mend : 0) + (j === units && i < units && units > 1 ? (j === i + 1 ? shared : shared) : 0)),
        unit: "per h",
      };
    },
    () => {
      const stages = whole(2, 6);
      const skip = random() < 0.5;
      return {
        kind: "absorbing degradation",
        names: ["As new", "Worn", "Cracked", "Deep crack", "Leaking", "Loose", "Failed"].slice(0, stages).concat([pick(["Failed", "Scrapped", "Retired", "Lost"])]),
        rates: table(stages + 1, (i, j) => (j === i + 1 ? figure(0.01, 2) : skip && j === stages && i < stages && random() < 0.7 ? figure(1e-4, 0.1) : 0)),
        unit: "1/yr",
      };
    },
    () => {
      const rate = (): number => figure(1e-9, 1e-5);
      const repair = figure(0.01, 0.2);
      const rows = [[0, rate(), rate(), rate()], [repair, 0, 0, rate()], [1 / 8760, 0, 0, rate()], [0, 0, 0, 0]];
      return { kind: "hourly safety rates", names: ["Working", "Detected fault", "Undetected fault", "Dangerous failure"], rates: rows, unit: "per hour" };
    },
    () => {
      const [fail, slow, mend] = [figure(0.05, 4), figure(0.1, 6), 8760 / figure(1, 72)];
      const rows = [[0, slow, fail], [figure(50, 900), 0, fail * 3], [mend, 0, 0]];
      return { kind: "yearly with hour-scale repair", names: ["Running", "Limited", "Down"], rates: rows, unit: "per year" };
    },
    () => {
      const grades = whole(2, 6);
      const die = Array.from({ length: grades }, () => figure(0.002, 0.3));
      const back = random() < 0.5;
      return {
        kind: "cohort",
        names: ["Well", "Mild", "Moderate", "Severe", "Critical", "Bedridden"].slice(0, grades).concat(["Dead"]),
        rates: table(grades + 1, (i, j) => (i === grades ? 0 : j === grades ? die[i] : j === i + 1 ? figure(0.02, 0.9) : back && j === i - 1 ? figure(0.02, 0.6) : 0)),
        unit: "per cycle",
      };
    },
    () => {
      const grades = whole(3, 8);
      return {
        kind: "grades",
        names: ["Grade A", "Grade B", "Grade C", "Grade D", "Grade E", "Grade F", "Grade G", "Grade H"].slice(0, grades).concat(["Default"]),
        rates: table(grades + 1, (i, j) => (i === grades ? 0 : figure(0.0005, 0.4) * 3 ** -Math.abs(i - j))),
        unit: "per year",
      };
    },
    () => {
      const n = whole(2, 7);
      return {
        kind: "shop floor",
        names: ["Producing", "Setting up", "Starved", "Blocked", "In repair", "Cleaning", "Inspection"].slice(0, n),
        rates: table(n, (i, j) => (j === (i + 1) % n || random() < 0.4 ? figure(0.01, 8) : 0)),
        unit: "1/h",
      };
    },
  ];

  for (let k = 0; k < count; k++) {
    let chain = families[k % families.length]();
    if (random() < 0.3) chain = worstFirst(chain);
    const form = pick(["both", "both", "both", "left", "top", "none", "list", "list with headings"]);
    yield { kind: chain.kind, layout: form, cells: form.startsWith("list") ? asList(chain, form.endsWith("headings")) : asSquare(chain, form) };
  }

  function asSquare(chain: Chain, form: string): CellValue[][] {
    const n = chain.names.length;
    const none = pick<CellValue>([0, 0, null, "", "-", "–"]);
    const diagonal = pick(["exits", "exits", "blank", "dash", "n/a", "x", "zero"]);
    const marks: Readonly<Record<string, CellValue>> = { blank: null, dash: "—", "n/a": "n/a", x: "x", zero: 0 };
    const body = chain.rates.map((row, i) =>
      row.map((rate, j): CellValue => {
        if (i !== j) return rate === 0 ? none : rate;
        const exits = row.reduce((sum, value) => sum + value, 0);
        return diagonal === "exits" ? -exits : marks[diagonal];
      }),
    );
    const rows: CellValue[][] = body.map((row, i) => (form === "both" || form === "left" ? [chain.names[i], ...row] : [...row]));
    if (form === "both") rows.unshift([pick<CellValue>(["", null, "from/to", "from \\ to", "State", `rates ${chain.unit}`, chain.unit]), ...chain.names]);
    if (form === "top") rows.unshift([...chain.names]);
    if (form === "both" && random() < 0.2) rows.push(Array.from({ length: n + 1 }, () => null)); // a generous selection
    return rows;
  }

  function asList(chain: Chain, headed: boolean): CellValue[][] {
    const rows: CellValue[][] = [];
    chain.rates.forEach((row, i) => row.forEach((rate, j) => { if (rate > 0) rows.push([chain.names[i], chain.names[j], rate]); }));
    return headed ? [["From", "To", pick(["Rate", `Rate ${chain.unit}`, "rate"])], ...rows] : rows;
  }
}

function worstFirst(chain: Chain): Chain {
  return {
    ...chain,
    kind: `${chain.kind}, worst first`,
    names: [...chain.names].reverse(),
    rates: [...chain.rates].reverse().map((row) => [...row].reverse()),
  };
}
