/**
 * The lines (rows or columns) of a sheet along one axis: where each begins in pixels, and which one is at a pixel.
 * Only lines whose size differs from the usual are stored, so an axis of a million lines costs nothing.
 */
export class Axis {
  private lines: Int32Array = new Int32Array(0);
  /** Sum of (size − usual) over the stored lines before each one, and the total at the end. */
  private shifts: Float64Array = new Float64Array(1);
  private sizes: ReadonlyMap<number, number> = new Map();

  constructor(readonly count: number, readonly usual: number) {}

  /** Replaces the sizes of the lines that differ from the usual; 0 hides a line. */
  setSizes(sizes: ReadonlyMap<number, number>): void {
    this.sizes = new Map(sizes);
    this.lines = Int32Array.from(this.sizes.keys()).sort();
    this.shifts = new Float64Array(this.lines.length + 1);
    this.lines.forEach((line, i) => {
      this.shifts[i + 1] = this.shifts[i]! + this.sizes.get(line)! - this.usual;
    });
  }

  size(line: number): number {
    return this.sizes.get(line) ?? this.usual;
  }

  hidden(line: number): boolean {
    return this.sizes.get(line) === 0;
  }

  /** Pixel at which a line begins; `start(count)` is the length of the axis. */
  start(line: number): number {
    let low = 0;
    let high = this.lines.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.lines[middle]! < line) low = middle + 1;
      else high = middle;
    }
    return line * this.usual + this.shifts[low]!;
  }

  get length(): number {
    return this.start(this.count);
  }

  /** The line that covers a pixel, held within the axis. */
  at(pixel: number): number {
    let low = 0;
    let high = this.count - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.start(middle) <= pixel) low = middle;
      else high = middle - 1;
    }
    // A hidden line begins where the next one does: never answer with a hidden one while a shown one precedes it.
    while (low > 0 && this.hidden(low)) low -= 1;
    return low;
  }

  /** The next shown line from `line` in steps of `by` (±1); stays where it is when there is none. */
  step(line: number, by: 1 | -1): number {
    for (let next = line + by; next >= 0 && next < this.count; next += by) if (!this.hidden(next)) return next;
    return line;
  }
}
