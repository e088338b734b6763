import sharp from "sharp";
import { Seed } from "./seed";

/** Drawn photos: a label, a box, a socket, a drive. The seed moves what differs from one to the next. */
const label = (
  s: Seed,
  serial: string,
) => `<rect width="640" height="440" fill="#22352c"/><g transform="rotate(${s.int(-4, 4)} 320 220)"><rect x="130" y="110" width="380" height="220" fill="#ede8dc"/>
<text x="160" y="160" font-size="30" font-family="monospace" fill="#15201b">${serial}</text>${Array.from({ length: 30 }, (_, i) => `<rect x="${160 + i * 11}" y="185" width="${s.int(2, 7)}" height="90" fill="#15201b"/>`).join("")}</g>`;
const box = (
  s: Seed,
) => `<rect width="640" height="440" fill="#c9b48b"/><path d="M0 0h640v60H0zM0 380h640v60H0z" fill="#b79e70"/><rect x="${90 + s.int(-20, 20)}" y="120" width="460" height="200" fill="#3b443f"/>
<g fill="none" stroke="#8c968f" stroke-width="4"><path d="M120 150h90v60h-90zM230 150h90v60h-90zM340 150h90v60h-90zM460 150h70v140h-70zM120 235h310M120 255h310M120 275h310"/></g>`;
const socket = (s: Seed) => {
  const bent = new Set([s.int(60, 200), s.int(60, 200), s.int(60, 200)]);
  return `<rect width="640" height="440" fill="#14241d"/>${Array.from({ length: 270 }, (_, i) => {
    const [x, y] = [20 + (i % 18) * 34, 30 + Math.floor(i / 18) * 27];
    return bent.has(i)
      ? `<path d="M${x} ${y}l18 12" stroke="#f4e3ae" stroke-width="6"/>`
      : `<path d="M${x} ${y}l14 -14" stroke="#a98a45" stroke-width="5"/>`;
  }).join("")}`;
};
const drive = (s: Seed) =>
  `<rect width="640" height="440" fill="#4a5750"/><rect x="150" y="60" width="340" height="320" rx="10" fill="#b9c2bb"/><circle cx="320" cy="200" r="${100 + s.int(-6, 6)}" fill="#dfe5df"/><circle cx="320" cy="200" r="22" fill="#7b847d"/><path d="M330 215l90 110" stroke="#59635c" stroke-width="14"/>`;

const KINDS = { box, socket, drive } as const;
const kept = new Map<string, Buffer>();

async function draw(svg: string): Promise<Buffer> {
  return sharp(Buffer.from(`<svg xmlns="http://www.w3.org/2000/svg" width="640" height="440">${svg}</svg>`))
    .jpeg({ quality: 72 })
    .toBuffer();
}

/** One of a dozen of its kind: drawn once, sent as often as needed. */
export async function picture(seed: Seed, kind: keyof typeof KINDS): Promise<Buffer> {
  const n = seed.int(1, 12);
  const key = `${kind}${n}`;
  const found = kept.get(key) ?? (await draw(KINDS[kind](new Seed(n * 7919))));
  kept.set(key, found);
  return found;
}

export const labelPicture = (seed: Seed, serial: string): Promise<Buffer> => draw(label(seed, serial));
