import type { TemplateName, TemplateProps } from "@/lib/mail/schema";

const base = { personName: "Ines Pinnock", link: "http://127.0.0.1:3000/rma/RMA-1207-K" };
const rma = { ...base, rmaNumber: "RMA-1207-K" };

/** One mail of each template, with words that a customer must find again in both bodies. */
export const SAMPLES: { [N in TemplateName]: { props: TemplateProps[N]; says: string[] } } = {
  acknowledgement: {
    props: { personName: "Ines Pinnock", ticketNumber: 1042, subject: "Node down" },
    says: ["Dear Ines Pinnock", "ticket 1042", "Node down"],
  },
  sign_in: {
    props: { link: "http://127.0.0.1:3000/sign-in/confirm?t=1", code: "7KQ2-M4XR-9T", minutes: 10 },
    says: ["7KQ2-M4XR-9T", "10 minutes", "http://127.0.0.1:3000/sign-in/confirm?t=1"],
  },
  decision: {
    props: {
      ...base,
      ticketNumber: 1042,
      serial: "VN8-77120-441",
      headline: "Your memory module is covered to 4 March 2027.",
      why: ["Clause 3.2 covers memory for 36 months from the ship date."],
      wouldChange: ["A photo that shows physical damage."],
      next: "Choose a remedy on your ticket’s page.",
    },
    says: ["covered to 4 March 2027", "Clause 3.2", "VN8-77120-441", "Choose a remedy", "rights by law"],
  },
  evidence_wanted: {
    props: {
      ...base,
      ticketNumber: 1042,
      serial: "VN8-77120-441",
      wanted: [{ what: "Photo of the slot", why: "it shows the contacts" }],
      text: "Thank you for writing.",
    },
    says: ["Photo of the slot", "it shows the contacts", "unplug every supply", "Never open a power supply"],
  },
  rma_authorized: {
    props: {
      ...rma,
      remedy: "Advance replacement",
      lines: [{ serial: "VN8-77120-441", what: "A2, 64 GB module" }],
      sendBy: "18 March 2026",
      address: ["Ostwick Server Works, returns", "1 Bay Road"],
      fees: ["40.00 EUR if no fault is found"],
      cautions: ["Power off. Unplug every supply and wait."],
    },
    says: [
      "RMA-1207-K",
      "18 March 2026",
      "VN8-77120-441",
      "1 Bay Road",
      "40.00 EUR",
      "Unplug every supply",
      "traveler",
    ],
  },
  rma_declined: {
    props: {
      personName: "Ines Pinnock",
      ticketNumber: 1042,
      serial: "VN8-77120-441",
      why: ["Clause 7.1: bent socket contacts, seen in E2."],
      wouldChange: ["A photo taken before the machine was opened."],
      offers: ["The part back to you as it is."],
    },
    says: [
      "Clause 7.1",
      "Under our warranty",
      "before the machine was opened",
      "back to you",
      "rights by law",
    ],
  },
  received: {
    props: { ...rma, serial: "VN8-77120-441", next: "It goes to the bench now." },
    says: ["RMA-1207-K", "VN8-77120-441", "to the bench now"],
  },
  bench_result: {
    props: {
      ...rma,
      serial: "VN8-77120-441",
      outcome: "Fault confirmed",
      finding: "Errors at once.",
      next: "We ship.",
    },
    says: ["Fault confirmed.", "Errors at once.", "We ship."],
  },
  shipped: {
    props: {
      ...rma,
      serialOut: "VN8-80001-002",
      serialReplaced: "VN8-77120-441",
      cover: "to 4 March 2027",
      carrier: "Hollin Freight",
      tracking: "HF 99 120",
    },
    says: ["VN8-80001-002", "VN8-77120-441", "to 4 March 2027", "HF 99 120", "wrist strap"],
  },
  settled: {
    props: { ...rma, what: "VN8-80001-002 went out for VN8-77120-441." },
    says: ["settled", "VN8-80001-002 went out"],
  },
  reply: {
    props: {
      personName: "Ines Pinnock",
      ticketNumber: 1042,
      text: "Hello,\n\nplease look at A2 <b>first</b>.",
      byName: "Ada Desk",
    },
    says: ["please look at A2 <b>first</b>.", "Ada Desk", "Ticket 1042"],
  },
};
