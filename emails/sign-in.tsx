import type { TemplateProps } from "../lib/mail/schema";
import { Act, Code, Letter, P, Small, type Sender } from "./letter";

export function SignIn(m: TemplateProps["sign_in"] & Sender) {
  return (
    <Letter seller={m.seller} preview={`Good for ${m.minutes} minutes, once.`} replies={false}>
      <P>Open this to sign in. A page asks you to confirm, and nothing happens before you do.</P>
      <Act href={m.link}>Open the sign-in page</Act>
      <P>Or type this code on the page where you asked for it:</P>
      <Code>{m.code}</Code>
      <Small>
        Link and code work once, for {m.minutes} minutes. If you did not ask for them, leave this mail alone:
        nobody gets in without it. We never ask for the code by telephone.
      </Small>
    </Letter>
  );
}
