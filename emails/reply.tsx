import type { TemplateProps } from "../lib/mail/schema";
import { Letter, P, Sign, Small, type Sender } from "./letter";

/** A person's own words, as they wrote them. */
export function Reply(m: TemplateProps["reply"] & Sender) {
  return (
    <Letter seller={m.seller} preview={m.text.slice(0, 120)}>
      {m.text.split(/\n{2,}/).map((part, i) => (
        <P key={i}>
          {part.split("\n").map((line, j) => (
            <span key={j}>
              {j > 0 ? <br /> : null}
              {line}
            </span>
          ))}
        </P>
      ))}
      <Sign by={m.byName} seller={m.seller} />
      <Small>Ticket {m.ticketNumber}</Small>
    </Letter>
  );
}
