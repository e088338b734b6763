import { createHmac, timingSafeEqual } from "node:crypto";
import { env } from "@/lib/env";

/**
 * Signed reply address: r+<key><opaque><mac>@domain. It proves the record, not the person.
 * The mac is HMAC-SHA-256 over purpose, ticket, recipient and key id, cut to 100 bits, in
 * lower-case base 32, since some hops fold case. The local part stays under 64 octets (RFC 5321 s. 4.5.3.1).
 */
const ALPHABET = "0123456789abcdefghjkmnpqrstvwxyz";
const KEY_ID = "a";

function base32(bytes: Uint8Array, length: number): string {
  let out = "";
  let bits = 0;
  let held = 0;
  for (const b of bytes) {
    held = (held << 8) | b;
    bits += 8;
    while (bits >= 5 && out.length < length) {
      bits -= 5;
      out += ALPHABET[(held >> bits) & 31];
    }
    held &= 0xff;
  }
  return out;
}

const opaque = (ticketNumber: number) => ticketNumber.toString(32).padStart(7, "0");

function mac(ticketNumber: number, email: string): string {
  const secret = createHmac("sha256", env().MENDBAY_SECRET).update("reply-address").digest();
  const text = ["reply", ticketNumber, email.toLowerCase(), KEY_ID].join("\n");
  return base32(createHmac("sha256", secret).update(text).digest(), 20);
}

export function replyAddress(ticketNumber: number, email: string): string {
  return `r+${KEY_ID}${opaque(ticketNumber)}${mac(ticketNumber, email)}@${env().MENDBAY_MAIL_DOMAIN}`;
}

export type TokenReading = { ticketNumber: number; tag: string } | null;

/** Takes an address apart; says nothing about whether its mac holds. */
export function readReplyAddress(address: string): TokenReading {
  const m = /^r\+a([0-9a-v]{7})([0-9a-z]{20})@(.+)$/i.exec(address.trim());
  if (!m || m[3]!.toLowerCase() !== env().MENDBAY_MAIL_DOMAIN.toLowerCase()) return null;
  return { ticketNumber: parseInt(m[1]!.toLowerCase(), 32), tag: m[2]!.toLowerCase() };
}

/** True when the tag was made for this ticket and one of these people. Constant time per candidate. */
export function tokenHolds(reading: NonNullable<TokenReading>, emails: readonly string[]): boolean {
  let held = false;
  for (const email of emails) {
    const want = Buffer.from(mac(reading.ticketNumber, email));
    const got = Buffer.from(reading.tag);
    if (want.length === got.length && timingSafeEqual(want, got)) held = true;
  }
  return held;
}
