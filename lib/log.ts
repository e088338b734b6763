import pino from "pino";

/** One JSON line per event. Secrets and mail bodies are never passed in. */
export const log = pino({
  level: process.env.MENDBAY_LOG ?? "info",
  base: null,
  redact: ["token", "secret", "password", "*.token", "*.secret", "req.headers.cookie"],
});
