import type { TemplateProps } from "../lib/mail/schema";
import { Greeting, Letter, P, Sign, type Sender } from "./letter";

export function Acknowledgement(m: TemplateProps["acknowledgement"] & Sender) {
  return (
    <Letter seller={m.seller} preview="Your message has come, and a person reads it.">
      <Greeting name={m.personName} />
      <P>
        Your message has come{m.subject ? ` (“${m.subject}”)` : ""}. It is ticket {m.ticketNumber}, and a
        person reads it next. You need not send it again.
      </P>
      <P>
        If you have them, photos of the fault and of the label with its serial help most. Please do not send
        anything back yet: a parcel without a number waits at our dock.
      </P>
      <Sign seller={m.seller} />
    </Letter>
  );
}
