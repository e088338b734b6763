/**
 * Where a mail belongs, decided from facts that the shell has looked up, each step with its
 * reason. The order: our signed address, then our own message ids, else a new ticket. A subject
 * never joins anything; a number in it is a hint for people.
 */
export type FilingTicket = {
  ticketId: string;
  number: number;
  participants: readonly string[];
  closedAt: Date | null;
};

export type FilingFacts = {
  fromEmail: string;
  now: Date;
  kind: "person" | "auto_reply" | "bounce" | "list" | "calendar" | "unreadable";
  /** Checked elsewhere: SPF, DKIM and DMARC. */
  proof: "proved" | "failed" | "not_checked";
  /** The ticket of a reply address whose mac holds. */
  byToken: FilingTicket | null;
  /** An address of the right form whose mac does not hold. */
  badToken: boolean;
  /** Tickets found by message ids of the headers, nearest first. */
  byId: readonly FilingTicket[];
  /** A ticket whose number the subject names. */
  hint: { ticketId: string; number: number } | null;
  /** A bounce: the ticket of the mail of ours that came back. */
  cameBack: FilingTicket | null;
  /** What makes a person look first, in words. */
  suspicions: readonly string[];
  /** Somebody of the ledger wrote it. */
  known: boolean;
};

export type FilingStep = { step: string; reason: string };
export type Filing = {
  to: "append" | "note" | "new" | "hold" | "park";
  ticketId: string | null;
  hintTicketId: string | null;
  /** For held mail: why a person must look, in one sentence. */
  why: string;
  steps: FilingStep[];
};

const TOKEN_DAYS = 180;
const DAY = 86_400_000;

export function fileWhere(f: FilingFacts): Filing {
  const steps: FilingStep[] = [];
  const say = (step: string, reason: string) => void steps.push({ step, reason });
  const done = (to: Filing["to"], more: Partial<Filing> = {}): Filing => ({
    to,
    ticketId: null,
    hintTicketId: f.hint?.ticketId ?? null,
    why: "",
    steps,
    ...more,
  });
  say("kind", f.kind);

  if (f.kind === "bounce") {
    if (f.cameBack) {
      say("bounce", "it returns a mail of ours");
      return done("note", { ticketId: f.cameBack.ticketId });
    }
    say("bounce", "it returns nothing that we sent, so it changes nothing");
    return done("park");
  }

  if (f.suspicions.length > 0) {
    for (const s of f.suspicions) say("look first", s);
    const at = f.byToken ?? f.byId[0] ?? null;
    return done("hold", {
      hintTicketId: at?.ticketId ?? f.hint?.ticketId ?? null,
      why: sentence(f.suspicions[0]!),
    });
  }

  if (f.badToken) say("reply address", "its signature does not hold, so it counts as none");
  let found: FilingTicket | null = null;
  if (f.byToken) {
    say("reply address", `signed for ticket ${f.byToken.number}`);
    found = f.byToken;
    const other = f.byId.find((t) => t.ticketId !== f.byToken!.ticketId);
    if (other) say("message ids", `they name ticket ${other.number}; the signed address counts`);
  } else if (f.byId[0]) {
    found = f.byId[0];
    say("message ids", `it answers a mail of ticket ${found.number}`);
    const other = f.byId.find((t) => t.ticketId !== found!.ticketId);
    if (other) say("message ids", `they name ticket ${other.number} too; the nearest counts`);
  } else say("message ids", "none of a mail that we know");
  if (f.hint && f.hint.ticketId !== found?.ticketId)
    say("subject", `it names ticket ${f.hint.number}; a subject joins nothing`);

  if (found?.closedAt && f.now.getTime() - found.closedAt.getTime() > TOKEN_DAYS * DAY) {
    say("age", `ticket ${found.number} has been closed for more than ${TOKEN_DAYS} days`);
    if (f.kind !== "auto_reply") return done("new", { hintTicketId: found.ticketId });
    return done("hold", {
      hintTicketId: found.ticketId,
      why: "An automatic mail about a ticket that was closed long ago.",
    });
  }

  if (f.kind === "auto_reply") {
    if (found && found.participants.includes(f.fromEmail)) {
      say("automatic", "noted on the ticket, and nothing else moves");
      return done("note", { ticketId: found.ticketId });
    }
    say("automatic", "it belongs to no ticket of its sender");
    return done("hold", {
      hintTicketId: found?.ticketId ?? null,
      why: "An automatic mail that belongs to nothing here.",
    });
  }

  if (found) {
    if (!found.participants.includes(f.fromEmail)) {
      say("sender", "has no part in this ticket");
      return done("hold", {
        hintTicketId: found.ticketId,
        why: `It answers ticket ${found.number}, and its sender has no part in it yet.`,
      });
    }
    say("sender", f.proof === "proved" ? "takes part, and is proved" : "takes part; not proved");
    return done("append", { ticketId: found.ticketId });
  }

  if (f.kind === "list" && !f.known) {
    say("sender", "unknown, and it was sent to many");
    return done("hold", { why: "It was sent to many by somebody we do not know." });
  }
  say("new", f.known ? "a customer of the ledger writes" : "somebody new writes");
  return done("new");
}

const sentence = (s: string) => `${s[0]!.toUpperCase()}${s.slice(1)}${/[.!?]$/.test(s) ? "" : "."}`;

/** Acknowledgements to one address in an hour, at most: two desks that face each other fall silent. */
export const ACKS_PER_HOUR = 3;

export type AckFacts = {
  filing: Filing["to"];
  mayAnswer: boolean;
  why: string;
  proof: FilingFacts["proof"];
  toOurselves: boolean;
  acksLastHour: number;
};

/** Whether the arrival is acknowledged, and why not. */
export function mayAcknowledge(a: AckFacts): { yes: boolean; reason: string } {
  const no = (reason: string) => ({ yes: false, reason });
  if (a.filing !== "new") return no("only a new ticket is acknowledged");
  if (!a.mayAnswer) return no(a.why);
  if (a.proof === "failed") return no("its sender is shown to be forged");
  if (a.toOurselves) return no("it comes from an address of ours");
  if (a.acksLastHour >= ACKS_PER_HOUR)
    return no(`this address was answered ${a.acksLastHour} times within the hour`);
  return { yes: true, reason: "a person wrote, and hears that it has come" };
}
