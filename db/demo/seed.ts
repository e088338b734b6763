/** One stream of numbers for the whole demo: the same seed gives the same seller. */
export class Seed {
  private state: number;
  constructor(seed: number) {
    this.state = seed >>> 0;
  }
  /** 0 up to 1 (mulberry32). */
  next(): number {
    this.state = (this.state + 0x6d2b79f5) >>> 0;
    let t = this.state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  }
  int(from: number, to: number): number {
    return from + Math.floor(this.next() * (to - from + 1));
  }
  pick<T>(list: readonly T[]): T {
    return list[Math.floor(this.next() * list.length)]!;
  }
  chance(p: number): boolean {
    return this.next() < p;
  }
  /** From an exponential law, in the unit of its mean. */
  exponential(mean: number): number {
    return -mean * Math.log(1 - this.next());
  }
  /** Serial characters that nobody mixes up. */
  code(length: number): string {
    let out = "";
    for (let i = 0; i < length; i++) out += "234679ACDEFHJKMNPRTWXY"[Math.floor(this.next() * 22)];
    return out;
  }
  uuid(): string {
    const hex = Array.from({ length: 32 }, () => Math.floor(this.next() * 16).toString(16));
    hex[12] = "4";
    hex[16] = "89ab"[Math.floor(this.next() * 4)]!;
    const s = hex.join("");
    return `${s.slice(0, 8)}-${s.slice(8, 12)}-${s.slice(12, 16)}-${s.slice(16, 20)}-${s.slice(20)}`;
  }
}
