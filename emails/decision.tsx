import type { TemplateProps } from "../lib/mail/schema";
import { Act, Answer, Greeting, Head2, Letter, Lines, P, Sign, Tag, type Sender } from "./letter";

export function Decision(m: TemplateProps["decision"] & Sender) {
  return (
    <Letter seller={m.seller} preview={m.headline} rights>
      <Greeting name={m.personName} />
      <Answer>{m.headline}</Answer>
      <P>
        This is about <Tag>{m.serial}</Tag>, ticket {m.ticketNumber}.
      </P>
      {m.why.length > 0 ? (
        <>
          <Head2>Why</Head2>
          <Lines of={m.why} />
        </>
      ) : null}
      {m.wouldChange.length > 0 ? (
        <>
          <Head2>What would change this</Head2>
          <Lines of={m.wouldChange} />
        </>
      ) : null}
      <Head2>What happens next</Head2>
      <P>{m.next}</P>
      <Act href={m.link}>Open your ticket</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
