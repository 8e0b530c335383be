import { textOf } from "../body";
import { cellSpan, type Finding } from "../finding";
import type { Aside, Recognised } from "../recognise";

/**
 * A rate table with more around it than a formula takes: units, notes, a second heading row, further columns of a list,
 * counts beside time in state. The formula has refused the range; this says what to select, or which formula converts it.
 */
export function layoutAsides(recognised: Recognised, span: (aside: Aside) => Finding["span"]): Finding[] {
  const { asides, selection, amount, reading, columns, rows } = recognised;
  const others = asides.filter((aside) => aside.role !== "total");
  if (amount === "counts") {
    const exposure = asides.find((aside) => aside.role === "exposure");
    return [
      {
        code: "countsBesideTime",
        severity: "stop",
        span: exposure ? span(exposure) : null,
        details: { form: reading.layout?.form ?? "square", columns: columns.map((column) => column + 1), exposure: exposure ? exposure.index + 1 : null },
      },
      ...zeroCounts(recognised),
    ];
  }
  if (others.length === 0) return [];
  const [first, ...more] = others;
  return [
    {
      code: reading.layout?.form === "list" ? "listWithMore" : "linesAside",
      severity: "stop",
      span: span(first),
      also: more.map(span).filter((place) => place !== null),
      remedy: selection ? "narrowSelection" : undefined,
      details: {
        lines: others.map((aside) => [aside.line, aside.index + 1, aside.label, aside.role]),
        columns: columns.map((column) => column + 1),
        rows: [rows[0] + 1, rows[rows.length - 1] + 1],
        selection: selection ? [selection.row, selection.column, selection.rows, selection.columns] : null,
      },
    },
  ];
}

/** A counted arrow with no event: in a list, where nobody lists what cannot happen. */
function zeroCounts({ reading, cells, rows, columns }: Recognised): Finding[] {
  const { layout } = reading;
  if (layout?.form !== "list") return [];
  const none = rows.map((row, k) => ({ row, k })).filter(({ k }) => k >= layout.body.row && cells[k][2] === 0);
  if (none.length === 0) return [];
  const [first, ...others] = none;
  return [
    {
      code: "zeroEvents",
      severity: "note",
      span: cellSpan(first.row, columns[2]),
      also: others.map(({ row }) => cellSpan(row, columns[2])),
      details: { fromName: textOf(cells[first.k][0]), toName: textOf(cells[first.k][1]), arrows: none.length, counted: true },
    },
  ];
}
