import { serialKey } from "@/lib/base/serial";

/** 0 up to 1, the same row for the same seed: a 32-bit linear congruential generator, its upper bits. */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state >>> 4) / 2 ** 28;
  };
}

const CHARS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ";
export const pick = <T>(random: () => number, list: ArrayLike<T>): T =>
  list[Math.floor(random() * list.length)]!;

/**
 * Serials as makers give them where they are not to be guessed: what the model is, and a random rest of seven characters.
 * No two are the same in the key.
 */
export function sparseSerials(random: () => number, count: number): string[] {
  const fronts = ["OW4420-", "OW2210-", "VS-19F4-", "VS38", "KM-8842-", "AL5100", "PW-16G-", "TR"];
  const made = new Map<string, string>();
  while (made.size < count) {
    const serial = pick(random, fronts) + Array.from({ length: 7 }, () => pick(random, CHARS)).join("");
    made.set(serialKey(serial), serial);
  }
  return [...made.values()];
}

const HANDS = ["wrong", "extra", "doubled", "dropped", "transposed"] as const;

/** The serial with one character wrong, in any of the ways hands have; never the same serial. */
export function withOneError(random: () => number, serial: string): string {
  for (;;) {
    const at = Math.floor(random() * serial.length);
    const [before, here, after] = [serial.slice(0, at), serial[at]!, serial.slice(at + 1)];
    const given = {
      wrong: before + pick(random, CHARS) + after,
      extra: before + pick(random, CHARS) + here + after,
      doubled: before + here + here + after,
      dropped: before + after,
      transposed: before + after.slice(0, 1) + here + after.slice(1),
    }[pick(random, HANDS)];
    if (serialKey(given) !== serialKey(serial)) return given;
  }
}
