/**
 * Which readers follow which cells. Areas are filed in grids of blocks whose size doubles from level to level, each
 * area on the level where it touches at most four blocks, so that a look-up meets few areas that do not match.
 */
import { overlap, type Area, type Rect } from "./address";

interface Filed<Reader> {
  readonly rect: Rect;
  readonly readers: Set<Reader>;
}

type Blocks<Reader> = Map<number, Set<Filed<Reader>>>;

interface SheetIndex<Reader> {
  readonly byRect: Map<string, Filed<Reader>>;
  readonly levels: Map<number, Blocks<Reader>>;
}

const nameOf = (rect: Rect): string => `${rect.row},${rect.column},${rect.rows},${rect.columns}`;
const levelOf = (rect: Rect): number => Math.ceil(Math.log2(Math.max(rect.rows, rect.columns)));
/** Blocks of a level are numbered column by column; a sheet has at most 2^20 of them in a column. */
const blockOf = (row: number, column: number): number => column * 2 ** 21 + row;

export class DependencyIndex<Reader> {
  private readonly sheets = new Map<string, SheetIndex<Reader>>();

  add(area: Area, reader: Reader): void {
    let sheet = this.sheets.get(area.sheet);
    if (!sheet) this.sheets.set(area.sheet, (sheet = { byRect: new Map(), levels: new Map() }));
    const name = nameOf(area);
    let filed = sheet.byRect.get(name);
    if (!filed) {
      filed = { rect: area, readers: new Set() };
      sheet.byRect.set(name, filed);
      const level = levelOf(area);
      let blocks = sheet.levels.get(level);
      if (!blocks) sheet.levels.set(level, (blocks = new Map()));
      for (const block of blocksOf(area, level)) {
        const members = blocks.get(block);
        if (members) members.add(filed);
        else blocks.set(block, new Set([filed]));
      }
    }
    filed.readers.add(reader);
  }

  remove(area: Area, reader: Reader): void {
    const sheet = this.sheets.get(area.sheet);
    const filed = sheet?.byRect.get(nameOf(area));
    if (!sheet || !filed || !filed.readers.delete(reader) || filed.readers.size > 0) return;
    sheet.byRect.delete(nameOf(area));
    const level = levelOf(area);
    const blocks = sheet.levels.get(level)!;
    for (const block of blocksOf(area, level)) {
      const members = blocks.get(block)!;
      members.delete(filed);
      if (members.size === 0) blocks.delete(block);
    }
    if (blocks.size === 0) sheet.levels.delete(level);
  }

  /** Calls back for every reader of any cell of the area; a reader filed under several areas may come more than once. */
  visit(area: Area, found: (reader: Reader) => void): void {
    const sheet = this.sheets.get(area.sheet);
    if (!sheet) return;
    for (const [level, blocks] of sheet.levels) {
      const report = (members: Set<Filed<Reader>> | undefined) => {
        if (members) for (const filed of members) if (overlap(filed.rect, area)) filed.readers.forEach(found);
      };
      const touched = blockCount(area, level);
      if (touched > blocks.size) blocks.forEach(report);
      else for (const block of blocksOf(area, level)) report(blocks.get(block));
    }
  }

  clear(): void {
    this.sheets.clear();
  }
}

function blockCount(rect: Rect, level: number): number {
  const size = 2 ** level;
  const down = Math.floor((rect.row + rect.rows - 1) / size) - Math.floor(rect.row / size) + 1;
  const across = Math.floor((rect.column + rect.columns - 1) / size) - Math.floor(rect.column / size) + 1;
  return down * across;
}

function* blocksOf(rect: Rect, level: number): Iterable<number> {
  const size = 2 ** level;
  const bottom = Math.floor((rect.row + rect.rows - 1) / size);
  const right = Math.floor((rect.column + rect.columns - 1) / size);
  for (let column = Math.floor(rect.column / size); column <= right; column++) {
    for (let row = Math.floor(rect.row / size); row <= bottom; row++) yield blockOf(row, column);
  }
}
