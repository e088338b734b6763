import "server-only";
import { z } from "zod";

/**
 * The one reader of the environment. A wrong setting stops the start, not a request.
 */
const Env = z.object({
  NODE_ENV: z.enum(["development", "production", "test"]).default("development"),
  DATABASE_URL: z.url().describe("PostgreSQL to use"),
  MENDBAY_URL: z
    .url()
    .default("http://127.0.0.1:3000")
    .describe("public origin; links in mails start with it"),
  MENDBAY_SECRET: z.string().min(32).describe("signs sessions and reply addresses"),
  MENDBAY_DEMO: z.enum(["0", "1"]).default("0").describe("1 opens the demo door; refused with real services"),
  MENDBAY_SELLER: z.string().default("Ostwick Server Works"),
  MENDBAY_MAIL_FROM: z.string().default("desk@ostwick.example"),
  MENDBAY_MAIL_DOMAIN: z.string().default("ostwick.example"),
  MENDBAY_ZONE: z
    .string()
    .default("Europe/London")
    .describe("the seller's zone; cover counts civil days in it"),
  MENDBAY_LOG: z.enum(["silent", "error", "warn", "info", "debug"]).default("info"),
  SMTP_URL: z.string().default("smtp://127.0.0.1:2525").describe("where the outbox sends to"),
  RECEIVER_HOST: z.string().default("127.0.0.1"),
  RECEIVER_PORT: z.coerce.number().int().min(0).max(65535).default(2526),
  RECEIVER_MAX_BYTES: z.coerce.number().int().positive().default(26_214_400),
  UPLOADTHING_TOKEN: z.string().optional(),
  UPLOADTHING_INGEST_URL: z.string().optional(),
  UPLOADTHING_API_URL: z.string().optional(),
  UPLOADTHING_UFS_HOST: z.string().optional(),
  UPLOADTHING_UFS_APP_ID_LOCATION: z.string().optional(),
  UPLOADTHING_CALLBACK_URL: z.string().optional(),
  PG_POOL_MAX: z.coerce.number().int().positive().default(10),
});

export type Env = z.output<typeof Env>;

const LOOPBACK = /^(127\.0\.0\.1|localhost|\[::1\])$/;

/** The demo door lets anybody in as anybody: it opens only where all that is behind it is on this machine. */
function demoIsAlone(found: Env): boolean {
  if (found.MENDBAY_DEMO === "0") return true;
  const all = [found.DATABASE_URL, found.SMTP_URL, found.MENDBAY_URL, found.UPLOADTHING_INGEST_URL ?? ""];
  return all.every((url) => URL.canParse(url) && LOOPBACK.test(new URL(url).hostname));
}
let cached: Env | undefined;

/** Reads and checks the settings once. @throws Error that names every wrong setting. */
export function env(): Env {
  if (cached) return cached;
  const parsed = Env.safeParse(process.env);
  if (!parsed.success) {
    const lines = parsed.error.issues.map((i) => `  ${i.path.join(".")}: ${i.message}`);
    throw new Error(`These settings are missing or wrong:\n${lines.join("\n")}`);
  }
  if (!demoIsAlone(parsed.data))
    throw new Error("MENDBAY_DEMO=1 beside a service that is not on this machine: the demo door stays shut.");
  cached = parsed.data;
  return cached;
}
