import type { TemplateProps } from "../lib/mail/schema";
import { Act, Answer, Greeting, Head2, Letter, P, Sign, Tag, type Sender } from "./letter";

export function BenchResult(m: TemplateProps["bench_result"] & Sender) {
  return (
    <Letter seller={m.seller} preview={m.outcome} rights>
      <Greeting name={m.personName} />
      <P>
        The bench has tested <Tag>{m.serial}</Tag> ({m.rmaNumber}).
      </P>
      <Answer>{m.outcome}.</Answer>
      {m.finding ? <P>{m.finding}</P> : null}
      <Head2>What happens next</Head2>
      <P>{m.next}</P>
      <Act href={m.link}>Follow your return</Act>
      <Sign seller={m.seller} />
    </Letter>
  );
}
