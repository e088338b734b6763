import type { TemplateProps } from "../lib/mail/schema";
import { Greeting, Head2, Letter, Lines, P, Sign, Tag, type Sender } from "./letter";

/** The hardest letter: the clause and the finding, what would change it, and what there is instead. */
export function RmaDeclined(m: TemplateProps["rma_declined"] & Sender) {
  return (
    <Letter
      seller={m.seller}
      preview="What we found, what would change it, and what we can do instead."
      rights
      law={m.law}
    >
      <Greeting name={m.personName} />
      <P>
        We have looked at your claim for <Tag>{m.serial}</Tag> (ticket {m.ticketNumber}). Under our warranty
        we cannot take this one on, and here is why.
      </P>
      <Lines of={m.why} />
      {m.wouldChange.length > 0 ? (
        <>
          <Head2>What would change this</Head2>
          <Lines of={m.wouldChange} />
        </>
      ) : null}
      {m.offers.length > 0 ? (
        <>
          <Head2>What we can do instead</Head2>
          <Lines of={m.offers} />
        </>
      ) : null}
      <P>If you see it otherwise, or know something that we do not, answer this mail. A person reads it.</P>
      <Sign seller={m.seller} />
    </Letter>
  );
}
