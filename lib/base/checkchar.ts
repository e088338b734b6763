/**
 * Check characters of ISO/IEC 7064. MOD 37,36 is the hybrid system over 0-9 and A-Z:
 * it finds every single wrong character and nearly every swap of neighbors.
 */
const ALPHABET = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ";

/** @throws RangeError for a character outside 0-9 and A-Z. */
export function mod37_36(data: string): string {
  const M = 36;
  let p = M;
  for (const c of data) {
    const a = ALPHABET.indexOf(c);
    if (a < 0) throw new RangeError(`"${c}" is not a digit or a capital letter`);
    let s = (p + a) % M;
    if (s === 0) s = M;
    p = (s * 2) % (M + 1);
  }
  return ALPHABET[(M + 1 - p) % M]!;
}

export const mod37_36Holds = (withCheck: string): boolean =>
  withCheck.length > 1 && mod37_36(withCheck.slice(0, -1)) === withCheck.slice(-1);

const CROCKFORD = "0123456789ABCDEFGHJKMNPQRSTVWXYZ";

/** Bytes as Crockford's base 32, five bits a character, most significant first. */
export function crockford(bytes: Uint8Array, length: number): string {
  let out = "";
  let bits = 0;
  let held = 0;
  for (const byte of bytes) {
    held = (held << 8) | byte;
    bits += 8;
    while (bits >= 5 && out.length < length) {
      bits -= 5;
      out += CROCKFORD[(held >> bits) & 31];
    }
    held &= 0xff;
  }
  return out;
}

/** What a person typed, as Crockford's reading rules have it: I and L are 1, O is 0, hyphens do not count. */
export function readCrockford(text: string): string {
  return text.toUpperCase().replace(/[\s-]/g, "").replace(/[IL]/g, "1").replace(/O/g, "0");
}
