import type { TemplateProps } from "../lib/mail/schema";
import { Act, Greeting, Letter, P, Sign, Tag, type Sender } from "./letter";

export function Received(m: TemplateProps["received"] & Sender) {
  return (
    <Letter seller={m.seller} preview={`${m.serial} has come in at our dock.`}>
      <Greeting name={m.personName} />
      <P>
        <Tag>{m.serial}</Tag> has come in at our dock, under <Tag>{m.rmaNumber}</Tag>.
      </P>
      <P>{m.next}</P>
      <Act href={m.link}>Follow your return</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
