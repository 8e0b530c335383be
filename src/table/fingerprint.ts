import type { RateTable } from "./rate-table";

/** 32 signs without I, L, O and U, which are easily misread (the alphabet of Crockford's base 32, 2002). */
const SIGNS = "0123456789ABCDEFGHJKMNPQRSTVWXYZ";

/**
 * Is it still the same table?
 *
 * Eight characters that follow from the number of states, their names in order, and every arrow with its exact rate. Blank,
 * zero and dash, a diagonal left out or given, the margin of the selection and the form of the table do not enter.
 *
 * @param table - the table as read
 * @returns eight of the 32 signs 0–9 and A–Z without I, L, O, U
 *
 * *Method*: MurmurHash3 x86 32 bit (Appleby 2011) of a canonical byte string under two seeds, 20 bits of each. No cryptographic
 * claim: two given tables agree by chance once in 2⁴⁰; a forger finds another table with the same characters.
 *
 * @example fingerprint(readRateTable([["", "up", "down"], ["up", "", 1], ["down", 3, ""]])) // eight characters
 */
export function fingerprint(table: Pick<RateTable, "generator" | "names">): string {
  const bytes = canonicalBytes(table);
  return signs(murmur3(bytes, 0x53746179)) + signs(murmur3(bytes, 0x72617465));
}

/**
 * Size, names (a count of 0 for none) in UTF-16 code units, then from, to, rate of each arrow by row; all little-endian.
 */
function canonicalBytes({ generator, names }: Pick<RateTable, "generator" | "names">): Uint8Array {
  const texts = names ?? [];
  const length = 8 + texts.reduce((sum, name) => sum + 4 + 2 * name.length, 0) + 16 * generator.arrowCount;
  const view = new DataView(new ArrayBuffer(length));
  let at = 0;
  const whole = (value: number): void => {
    view.setUint32(at, value, true);
    at += 4;
  };
  whole(generator.size);
  whole(texts.length);
  for (const name of texts) {
    whole(name.length);
    for (let i = 0; i < name.length; i++, at += 2) view.setUint16(at, name.charCodeAt(i), true);
  }
  for (const [from, to, rate] of generator.arrows()) {
    whole(from);
    whole(to);
    view.setFloat64(at, rate, true);
    at += 8;
  }
  return new Uint8Array(view.buffer);
}

/** Four signs from the upper 20 bits. */
function signs(hash: number): string {
  return [27, 22, 17, 12].map((shift) => SIGNS[(hash >>> shift) & 31]).join("");
}

/** MurmurHash3_x86_32. */
export function murmur3(bytes: Uint8Array, seed: number): number {
  const scramble = (block: number): number => {
    const k = Math.imul(block, 0xcc9e2d51);
    return Math.imul((k << 15) | (k >>> 17), 0x1b873593);
  };
  let hash = seed | 0;
  const whole = bytes.length & ~3;
  for (let i = 0; i < whole; i += 4) {
    hash ^= scramble(bytes[i] | (bytes[i + 1] << 8) | (bytes[i + 2] << 16) | (bytes[i + 3] << 24));
    hash = (Math.imul((hash << 13) | (hash >>> 19), 5) + 0xe6546b64) | 0;
  }
  let rest = 0;
  for (let i = bytes.length - 1; i >= whole; i--) rest = (rest << 8) | bytes[i];
  if (whole < bytes.length) hash ^= scramble(rest);
  hash ^= bytes.length;
  hash = Math.imul(hash ^ (hash >>> 16), 0x85ebca6b);
  hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35);
  return (hash ^ (hash >>> 16)) >>> 0;
}
