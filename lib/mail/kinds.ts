import type { HeaderLine } from "./ids";
import type { MailKind } from "./schema";

/**
 * What kind of mail it is. Only a person's is ever answered; a machine's is filed, noted or parked.
 * Hints outside the standards (Precedence, List-Id, suppress headers) stop an answer and nothing
 * else: a person may write through a list.
 */
export type KindFacts = {
  headers: readonly HeaderLine[];
  envelopeFrom: string;
  fromEmail: string;
  /** Lower case, without parameters: "multipart/report". */
  contentType: string;
  /** The report-type parameter of a multipart/report, lower case. */
  reportType: string;
  /** A calendar part with a method in it. */
  calendar: boolean;
  /** Nothing in it could be read here: encrypted, or the parser gave up. */
  unreadable: boolean;
};

export type KindAnswer = { kind: MailKind; mayAnswer: boolean; why: string };

/** The header's value without comments and parameters (RFC 3834 s. 5): "NO (really)" is "no". */
function plainValue(headers: readonly HeaderLine[], key: string): string {
  const line = headers.find((h) => h.key === key)?.line ?? "";
  return line
    .slice(line.indexOf(":") + 1)
    .replace(/\([^()]*\)/g, "")
    .split(";")[0]!
    .trim()
    .toLowerCase();
}

const MACHINES =
  /^(?:mailer-daemon|postmaster|no-?reply|do-?not-?reply|owner-.*|.*-(?:request|owner|bounces?))$/i;
const MAX_HOPS = 100;

export const hops = (headers: readonly HeaderLine[]) => headers.filter((h) => h.key === "received").length;

export function kindOf(mail: KindFacts): KindAnswer {
  const { headers } = mail;
  const has = (key: string) => headers.some((h) => h.key === key);
  const local = (address: string) => address.split("@")[0] ?? "";
  const no = (kind: MailKind, why: string): KindAnswer => ({ kind, mayAnswer: false, why });

  if (mail.contentType === "multipart/report") {
    if (mail.reportType === "delivery-status") return no("bounce", "it is a delivery report (RFC 3464)");
    return no("auto_reply", `it is a ${mail.reportType || "machine"} report (RFC 6522)`);
  }
  const automatic = plainValue(headers, "auto-submitted");
  if (automatic !== "" && automatic !== "no")
    return no("auto_reply", `it says Auto-Submitted: ${automatic} (RFC 3834)`);
  if (/^mailer-daemon$/i.test(local(mail.fromEmail)))
    return no("bounce", "it comes from a mail system, in no standard form");
  if (has("x-autoreply") || has("x-autorespond") || plainValue(headers, "precedence") === "auto_reply")
    return no("auto_reply", "it says that it is an automatic answer");
  if (mail.unreadable) return no("unreadable", "it could not be read here");
  if (mail.calendar) return no("calendar", "it carries an invitation, which a person answers");
  if (mail.envelopeFrom.trim() === "" || mail.envelopeFrom.trim() === "<>")
    return no("auto_reply", "it has the null return path, which is never answered (RFC 5321 s. 4.5.5)");
  const bulk = ["bulk", "list", "junk"].includes(plainValue(headers, "precedence"));
  if (has("list-id") || has("list-post") || has("list-unsubscribe") || bulk)
    return no("list", "it came through a list or was sent to many (RFC 2369)");
  const quiet = [
    [hops(headers) > MAX_HOPS, "it has gone through too many hosts (RFC 5321 s. 6.3)"],
    [
      MACHINES.test(local(mail.fromEmail)) || MACHINES.test(local(mail.envelopeFrom)),
      "its sender is a machine",
    ],
    [has("x-auto-response-suppress"), "it asks for no automatic answer"],
    // RFC 3834 s. 4: an automatic answer goes to the return path, and to nobody a header names.
    [mail.envelopeFrom.toLowerCase() !== mail.fromEmail.toLowerCase(), "its return path is not its sender"],
  ] as const;
  const stop = quiet.find(([stops]) => stops);
  return { kind: "person", mayAnswer: !stop, why: stop ? stop[1] : "a person wrote it" };
}

export type DeliveryReport = {
  recipient: string;
  action: string;
  status: string;
  /** Only this marks an address bad: a delay is not a failure (RFC 3464 s. 2.3.3). */
  failed: boolean;
};

/** Reads the machine part of a delivery report: groups of fields with a blank line between (RFC 3464 s. 2.1). */
export function deliveryReports(text: string): DeliveryReport[] {
  const groups = text
    .slice(0, 64_000)
    .replace(/\r\n?/g, "\n")
    .replace(/\n[ \t]+/g, " ")
    .split(/\n[ \t]*\n+/)
    .map((g) => new Map(g.split("\n").map((l) => fieldOf(l))));
  return groups
    .filter((g) => g.has("action"))
    .map((g) => {
      const action = (g.get("action") ?? "").toLowerCase();
      const status = /^\d\.\d{1,3}\.\d{1,3}/.exec(g.get("status") ?? "")?.[0] ?? "";
      return {
        recipient: (g.get("final-recipient") ?? g.get("original-recipient") ?? "")
          .replace(/^[^;]*;\s*/, "")
          .trim(),
        action,
        status,
        failed: action === "failed" && !status.startsWith("4"),
      };
    });
}

function fieldOf(line: string): [string, string] {
  const at = line.indexOf(":");
  if (at < 0) return ["", line];
  return [line.slice(0, at).trim().toLowerCase(), line.slice(at + 1).trim()];
}
