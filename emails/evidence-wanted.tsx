import type { TemplateProps } from "../lib/mail/schema";
import { Act, Greeting, Letter, Lines, P, Sign, Tag, type Sender } from "./letter";

export function EvidenceWanted(m: TemplateProps["evidence_wanted"] & Sender) {
  return (
    <Letter seller={m.seller} preview={m.wanted.map((w) => w.what).join(", ")}>
      <Greeting name={m.personName} />
      {m.text ? m.text.split(/\n{2,}/).map((part, i) => <P key={i}>{part}</P>) : null}
      <P>
        Before we can decide on ticket {m.ticketNumber}
        {m.serial ? (
          <>
            {" "}
            (<Tag>{m.serial}</Tag>)
          </>
        ) : null}
        , please send us:
      </P>
      <Lines of={m.wanted.map((w) => (w.why ? `${w.what}: ${w.why}` : w.what))} />
      <P>
        Look from outside first. Where hands would go in, power off and unplug every supply before, and leave
        it to somebody trained if you are not. Never open a power supply.
      </P>
      {m.link ? <Act href={m.link}>Send it on your ticket’s page</Act> : null}
      <P>{m.link ? "Or answer" : "Answer"} this mail with the files attached.</P>
      <Sign seller={m.seller} />
    </Letter>
  );
}
