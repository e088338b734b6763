import type { TemplateName, TemplateProps } from "./schema";

/** Subjects by template. A number in a subject helps people; it never files a mail. */
export function subjectFor<N extends TemplateName>(
  template: N,
  props: TemplateProps[N],
  about: string,
): string {
  const p = props as Record<string, unknown>;
  const text = ((): string => {
    switch (template) {
      case "acknowledgement":
        return `We have your message (ticket ${String(p.ticketNumber)})`;
      case "sign_in":
        return "Your link to sign in";
      case "decision":
        return `Your cover, ticket ${String(p.ticketNumber)}: ${String(p.headline)}`;
      case "evidence_wanted":
        return `We need to see it (ticket ${String(p.ticketNumber)})`;
      case "rma_authorized":
        return `${String(p.rmaNumber)} is authorized: how to send it`;
      case "rma_declined":
        return `About your claim, ticket ${String(p.ticketNumber)}`;
      case "received":
        return `${String(p.rmaNumber)}: your part is here`;
      case "bench_result":
        return `${String(p.rmaNumber)}: what the bench found`;
      case "shipped":
        return `${String(p.rmaNumber)}: your replacement is on its way`;
      case "settled":
        return `${String(p.rmaNumber)} is settled`;
      case "reply":
        return `Re: ${about} (ticket ${String(p.ticketNumber)})`;
      default:
        return about;
    }
  })();
  return headerText(text);
}

/** One header line: no line ends ever leave in it (RFC 5322 s. 2.2), and it stays under 998 octets. */
export function headerText(text: string): string {
  return text
    .replace(/[\r\n\u0000-\u001f\u007f\u2028\u2029]+/g, " ")
    .replace(/\s{2,}/g, " ")
    .trim()
    .slice(0, 240);
}

/** Backoff before try n+1, in seconds, with jitter given from outside as 0..1. */
export function backoffSeconds(attempts: number, jitter: number): number {
  const base = Math.min(6 * 3600, 30 * 2 ** Math.max(0, attempts - 1));
  return Math.round(base * (0.75 + jitter * 0.5));
}
export const MAX_ATTEMPTS = 9;
