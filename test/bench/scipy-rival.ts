import { spawn, type ChildProcessWithoutNullStreams } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { createInterface } from "node:readline";
import type { Contestant } from "./timing";

declare const BENCH_FOLDER: string;

/** SciPy in a process of its own, one thread; null where it is not installed (Debian: apt-get install python3-scipy). */
export class ScipyRival {
  private counter = 0;
  private readonly folder = mkdtempSync(path.join(tmpdir(), "bench-"));

  private constructor(
    private readonly process: ChildProcessWithoutNullStreams,
    private readonly lines: AsyncIterator<string>,
    readonly versions: string,
  ) {}

  static async start(): Promise<ScipyRival | null> {
    for (const python of ["/usr/bin/python3", "python3"]) {
      const environment = { ...process.env };
      delete environment.OPENBLAS_CORETYPE;
      delete environment.OPENBLAS_L2_SIZE;
      const child = spawn(python, [path.join(BENCH_FOLDER, "scipy-rival.py")], {
        env: { ...environment, OPENBLAS_NUM_THREADS: "1", OMP_NUM_THREADS: "1" },
        stdio: ["pipe", "pipe", "ignore"],
      }) as unknown as ChildProcessWithoutNullStreams;
      child.on("error", () => undefined);
      const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
      const first = await lines.next();
      if (first.done) continue;
      const { scipy, numpy } = JSON.parse(first.value) as { scipy: string; numpy: string };
      return new ScipyRival(child, lines, `SciPy ${scipy}, NumPy ${numpy}`);
    }
    return null;
  }

  /** exp of a matrix, or the long-run shares by a dense solve, of a row-major n × n array. */
  dense(what: "expm" | "solve", n: number, values: Float64Array): Contestant {
    const file = path.join(this.folder, `${++this.counter}`);
    writeFileSync(file, values);
    return this.contestant({ what, n, file });
  }

  /** exp(Qᵀt) times the unit vector of a state. */
  multiply(n: number, rows: Int32Array, columns: Int32Array, values: Float64Array, start: number, time: number): Contestant {
    const file = path.join(this.folder, `${++this.counter}`);
    writeFileSync(`${file}.rows`, rows);
    writeFileSync(`${file}.columns`, columns);
    writeFileSync(`${file}.values`, values);
    return this.contestant({ what: "multiply", n, file, start, time });
  }

  stop(): void {
    this.process.stdin.end();
    rmSync(this.folder, { recursive: true, force: true });
  }

  private contestant(request: object): Contestant {
    const key = this.counter;
    return {
      name: "SciPy",
      measure: async () => {
        this.process.stdin.write(`${JSON.stringify({ ...request, key })}\n`);
        const { value } = (await this.lines.next()) as { value: string };
        return (JSON.parse(value) as { seconds: number }).seconds * 1e6;
      },
    };
  }
}
