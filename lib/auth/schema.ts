import { z } from "zod";

export const SignInAsk = z.object({
  email: z
    .email("Write your e-mail address, such as name@company.example.")
    .max(254)
    .transform((e) => e.trim().toLowerCase()),
  next: z.string().max(500).default(""),
});
export const SignInCode = z.object({
  email: z
    .email("Write the address you asked with.")
    .max(254)
    .transform((e) => e.trim().toLowerCase()),
  code: z.string().trim().min(8, "The code has ten characters, in two groups.").max(24),
  next: z.string().max(500).default(""),
});

export const CODE_MINUTES = 10;
export const SESSION_DAYS = 7;

/** Only a path of ours may follow a sign-in. */
export const safeNext = (next: string): string => (/^\/(?![/\\])[\x21-\x7e]*$/.test(next) ? next : "/");

/** "7K2M9-Q4X1B". */
export const showCode = (code: string): string => `${code.slice(0, 5)}-${code.slice(5)}`;

export type DemoPerson = { email: string; name: string; roles: string[]; detail: string };
