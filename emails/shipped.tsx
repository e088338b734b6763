import type { TemplateProps } from "../lib/mail/schema";
import { Act, Cautions, Greeting, Letter, Lines, P, Sign, Tag, type Sender } from "./letter";

export function Shipped(m: TemplateProps["shipped"] & Sender) {
  return (
    <Letter seller={m.seller} preview={`${m.carrier} ${m.tracking}`.trim()}>
      <Greeting name={m.personName} />
      <P>
        <Tag>{m.serialOut}</Tag> is on its way to you. It takes the place of <Tag>{m.serialReplaced}</Tag> (
        {m.rmaNumber}).
      </P>
      <Lines
        of={[`Its cover: ${m.cover}`, m.tracking ? `${m.carrier}, ${m.tracking}` : m.carrier].filter(Boolean)}
      />
      <Cautions
        of={[
          "Power off, unplug every supply and wait before you open the machine; heat sinks stay hot.",
          "Wear a wrist strap that is clipped to the chassis.",
          "Let the part come to room temperature in its bag first.",
        ]}
      />
      <Act href={m.link}>Follow your return</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
