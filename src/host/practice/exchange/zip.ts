/**
 * Zip files, read with care. What a file claims about its contents is checked before anything is unpacked, and what
 * is unpacked is counted against the claim, so that a small file cannot fill the memory.
 * Layout: PKWARE APPNOTE 6.3, sections 4.3.7 (local header), 4.3.12 (central directory), 4.3.16 (end of it).
 */
import { ExchangeRefused } from "./refused";

export interface ZipLimits {
  readonly fileBytes: number;
  readonly entries: number;
  readonly unpackedBytes: number;
  /** Unpacked size over packed size, of entries larger than a megabyte. */
  readonly ratio: number;
}

export const LIMITS: ZipLimits = { fileBytes: 50_000_000, entries: 2_000, unpackedBytes: 400_000_000, ratio: 250 };

const LOCAL = 0x04034b50;
const CENTRAL = 0x02014b50;
const END = 0x06054b50;
const END_LENGTH = 22;
const LONGEST_COMMENT = 65_535;
const STORED = 0;
const DEFLATED = 8;
const ENCRYPTED_FLAG = 1;

interface Entry {
  readonly name: string;
  readonly method: number;
  readonly packed: number;
  readonly unpacked: number;
  readonly offset: number;
}

const damaged = (what: string): ExchangeRefused => new ExchangeRefused(`The file is damaged or no .xlsx workbook: ${what}.`);
const megabytes = (bytes: number): string => `${Math.round(bytes / 1e6)} MB`;

/** The entries of a zip file by name, unpacked. @throws ExchangeRefused */
export async function unzip(bytes: Uint8Array, limits: ZipLimits = LIMITS): Promise<Map<string, Uint8Array>> {
  if (bytes.length > limits.fileBytes) throw new ExchangeRefused(`The file has ${megabytes(bytes.length)}; at most ${megabytes(limits.fileBytes)} can be opened.`);
  if (bytes[0] === 0xd0 && bytes[1] === 0xcf) throw new ExchangeRefused("The file is protected by a password or is of the old .xls kind. Save it as .xlsx without a password.");
  const entries = directory(bytes, limits);
  const contents = new Map<string, Uint8Array>();
  for (const entry of entries) contents.set(entry.name, await unpack(bytes, entry));
  return contents;
}

function directory(bytes: Uint8Array, limits: ZipLimits): Entry[] {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const end = findEnd(view);
  const count = view.getUint16(end + 10, true);
  const start = view.getUint32(end + 16, true);
  if (count === 0xffff || start === 0xffffffff) throw new ExchangeRefused("The file uses a form of zip for very large files, which cannot be opened here.");
  if (count > limits.entries) throw new ExchangeRefused(`The file has ${count} parts; at most ${limits.entries} are accepted.`);
  const entries: Entry[] = [];
  const names = new Set<string>();
  let total = 0;
  let at = start;
  for (let index = 0; index < count; index++) {
    if (at + 46 > end || view.getUint32(at, true) !== CENTRAL) throw damaged("its table of contents cannot be read");
    const flags = view.getUint16(at + 8, true);
    const nameLength = view.getUint16(at + 28, true);
    const name = new TextDecoder().decode(bytes.subarray(at + 46, at + 46 + nameLength));
    const entry: Entry = {
      name: name.replace(/\\/g, "/").replace(/^\/+/, ""),
      method: view.getUint16(at + 10, true),
      packed: view.getUint32(at + 20, true),
      unpacked: view.getUint32(at + 24, true),
      offset: view.getUint32(at + 42, true),
    };
    if ((flags & ENCRYPTED_FLAG) !== 0) throw new ExchangeRefused("The file is encrypted. Save it without a password.");
    if (entry.method !== STORED && entry.method !== DEFLATED) throw damaged(`"${entry.name}" is packed in an unknown way`);
    if (names.has(entry.name.toLowerCase())) throw damaged(`it has two parts named "${entry.name}"`);
    names.add(entry.name.toLowerCase());
    total += entry.unpacked;
    if (entry.unpacked > 1_000_000 && entry.unpacked > limits.ratio * entry.packed) {
      throw new ExchangeRefused(`"${entry.name}" would grow to ${Math.round(entry.unpacked / Math.max(1, entry.packed))} times its size; at most ${limits.ratio} times is accepted.`);
    }
    if (total > limits.unpackedBytes) throw new ExchangeRefused(`The file would unpack to more than ${megabytes(limits.unpackedBytes)}, which is the limit.`);
    if (!entry.name.endsWith("/")) entries.push(entry);
    at += 46 + nameLength + view.getUint16(at + 30, true) + view.getUint16(at + 32, true);
  }
  return entries;
}

function findEnd(view: DataView): number {
  const last = view.byteLength - END_LENGTH;
  for (let at = last; at >= 0 && at >= last - LONGEST_COMMENT; at--) if (view.getUint32(at, true) === END) return at;
  throw damaged("it is no zip file");
}

async function unpack(bytes: Uint8Array, entry: Entry): Promise<Uint8Array> {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const { offset, name } = entry;
  if (offset + 30 > bytes.length || view.getUint32(offset, true) !== LOCAL) throw damaged(`"${name}" is not where it should be`);
  const begin = offset + 30 + view.getUint16(offset + 26, true) + view.getUint16(offset + 28, true);
  const packed = bytes.subarray(begin, begin + entry.packed);
  if (packed.length < entry.packed) throw damaged(`"${name}" is cut off`);
  if (entry.method === STORED) {
    if (entry.packed !== entry.unpacked) throw damaged(`"${name}" has the wrong size`);
    return packed;
  }
  return inflate(packed, entry.unpacked, name);
}

/** Unpacks until the claimed size; more than that, or less, is refused. */
async function inflate(packed: Uint8Array, size: number, name: string): Promise<Uint8Array> {
  const result = new Uint8Array(size);
  let filled = 0;
  const stream = new Blob([packed as BlobPart]).stream().pipeThrough(new DecompressionStream("deflate-raw"));
  const reader = stream.getReader();
  try {
    for (;;) {
      const { done, value } = await reader.read();
      if (done) break;
      if (filled + value.length > size) throw damaged(`"${name}" is larger than it claims`);
      result.set(value, filled);
      filled += value.length;
    }
  } catch (error) {
    await reader.cancel().catch(() => undefined);
    throw error instanceof ExchangeRefused ? error : damaged(`"${name}" cannot be unpacked`);
  }
  if (filled !== size) throw damaged(`"${name}" is shorter than it claims`);
  return result;
}

/** A zip file of the given entries, each packed where `pack` asks for it. */
export async function zip(contents: ReadonlyMap<string, Uint8Array>, pack: boolean): Promise<Uint8Array> {
  const pieces: Uint8Array[] = [];
  const central: Uint8Array[] = [];
  let offset = 0;
  for (const [name, content] of contents) {
    const label = new TextEncoder().encode(name);
    const body = pack ? await deflate(content) : content;
    const header = entryHeader(label, content, body, pack, offset);
    pieces.push(header.local, label, body);
    central.push(header.central, label);
    offset += header.local.length + label.length + body.length;
  }
  const centralLength = central.reduce((sum, piece) => sum + piece.length, 0);
  const end = new DataView(new ArrayBuffer(END_LENGTH));
  end.setUint32(0, END, true);
  end.setUint16(8, contents.size, true);
  end.setUint16(10, contents.size, true);
  end.setUint32(12, centralLength, true);
  end.setUint32(16, offset, true);
  return join([...pieces, ...central, new Uint8Array(end.buffer)]);
}

function entryHeader(label: Uint8Array, content: Uint8Array, body: Uint8Array, packed: boolean, offset: number): { local: Uint8Array; central: Uint8Array } {
  const FIRST_DAY = 0x21; // 1980-01-01, so that equal contents give equal files
  const common = (view: DataView, at: number) => {
    view.setUint16(at, 20, true); // version needed
    view.setUint16(at + 2, 0x800, true); // names in UTF-8
    view.setUint16(at + 4, packed ? DEFLATED : STORED, true);
    view.setUint16(at + 8, FIRST_DAY, true);
    view.setUint32(at + 10, crc32(content), true);
    view.setUint32(at + 14, body.length, true);
    view.setUint32(at + 18, content.length, true);
    view.setUint16(at + 22, label.length, true);
  };
  const local = new DataView(new ArrayBuffer(30));
  local.setUint32(0, LOCAL, true);
  common(local, 4);
  const central = new DataView(new ArrayBuffer(46));
  central.setUint32(0, CENTRAL, true);
  central.setUint16(4, 20, true);
  common(central, 6);
  central.setUint32(42, offset, true);
  return { local: new Uint8Array(local.buffer), central: new Uint8Array(central.buffer) };
}

async function deflate(content: Uint8Array): Promise<Uint8Array> {
  const stream = new Blob([content as BlobPart]).stream().pipeThrough(new CompressionStream("deflate-raw"));
  return new Uint8Array(await new Response(stream).arrayBuffer());
}

function join(pieces: readonly Uint8Array[]): Uint8Array {
  const whole = new Uint8Array(pieces.reduce((sum, piece) => sum + piece.length, 0));
  let at = 0;
  for (const piece of pieces) {
    whole.set(piece, at);
    at += piece.length;
  }
  return whole;
}

const CRC_TABLE = Uint32Array.from({ length: 256 }, (_, index) => {
  let value = index;
  for (let bit = 0; bit < 8; bit++) value = value & 1 ? (value >>> 1) ^ 0xedb88320 : value >>> 1;
  return value;
});

/** ISO 3309 check sum, as zip files carry it. */
export function crc32(bytes: Uint8Array): number {
  let value = 0xffffffff;
  for (const byte of bytes) value = CRC_TABLE[(value ^ byte) & 0xff]! ^ (value >>> 8);
  return (value ^ 0xffffffff) >>> 0;
}
