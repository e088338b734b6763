import type { TemplateProps } from "../lib/mail/schema";
import {
  Act,
  Answer,
  Cautions,
  Greeting,
  Head2,
  Letter,
  Lines,
  P,
  Sign,
  Small,
  Tag,
  type Sender,
} from "./letter";

export function RmaAuthorized(m: TemplateProps["rma_authorized"] & Sender) {
  const goodwill = m.goodwill ?? [];
  return (
    <Letter
      seller={m.seller}
      preview={`Send it by ${m.sendBy}. The traveler is attached.`}
      rights
      law={m.law}
    >
      <Greeting name={m.personName} />
      <Answer>Your return is authorized.</Answer>
      <P>
        Its number is <Tag>{m.rmaNumber}</Tag>. What you get: {m.remedy.toLowerCase()}. Please send it by{" "}
        {m.sendBy}.
      </P>
      {goodwill.length > 0 ? (
        <P>
          {goodwill.length === m.lines.length ? "This" : `For ${goodwill.join(", ")} this`} is goodwill, an
          exception we make outside the terms of our warranty, and it changes no right that you have by law.
        </P>
      ) : null}
      <Head2>Send exactly this</Head2>
      <Lines
        of={m.lines.map((l) => (
          <>
            <Tag>{l.serial}</Tag> {l.what}
          </>
        ))}
      />
      <P>Nothing else: no rails, cables or drives that are not named here.</P>
      <Cautions of={m.cautions} />
      <Head2>Where to</Head2>
      <P>
        {m.address.map((line, i) => (
          <span key={i}>
            {line}
            <br />
          </span>
        ))}
      </P>
      <P>The traveler is attached. Print it, and put it into the box with the part.</P>
      {m.fees.length > 0 ? (
        <>
          <Head2>What it may cost</Head2>
          <Lines of={m.fees} />
        </>
      ) : (
        <Small>No fee applies to this return{goodwill.length > 0 ? "" : " under our warranty"}.</Small>
      )}
      <Act href={m.link}>See the packing steps</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
