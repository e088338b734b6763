import type { TemplateProps } from "../lib/mail/schema";
import { Act, Answer, Greeting, Letter, P, Sign, Tag, type Sender } from "./letter";

export function Settled(m: TemplateProps["settled"] & Sender) {
  return (
    <Letter seller={m.seller} preview={m.what} rights>
      <Greeting name={m.personName} />
      <Answer>Your return is settled.</Answer>
      <P>
        <Tag>{m.rmaNumber}</Tag> {m.what}
      </P>
      <P>If something is not right, answer this mail: it opens the same ticket again.</P>
      <Act href={m.link}>See the whole return</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
