import { render, toPlainText } from "@react-email/render";
import type { ReactElement } from "react";
import { Acknowledgement } from "@/emails/acknowledgement";
import { BenchResult } from "@/emails/bench-result";
import { Decision } from "@/emails/decision";
import { EvidenceWanted } from "@/emails/evidence-wanted";
import { Received } from "@/emails/received";
import { Reply } from "@/emails/reply";
import { RmaAuthorized } from "@/emails/rma-authorized";
import { RmaDeclined } from "@/emails/rma-declined";
import { Settled } from "@/emails/settled";
import { Shipped } from "@/emails/shipped";
import { SignIn } from "@/emails/sign-in";
import { TEMPLATE_PROPS, type TemplateName, type TemplateProps } from "./schema";

const LETTERS: { [N in TemplateName]: (props: TemplateProps[N] & { seller: string }) => ReactElement } = {
  acknowledgement: Acknowledgement,
  sign_in: SignIn,
  decision: Decision,
  evidence_wanted: EvidenceWanted,
  rma_authorized: RmaAuthorized,
  rma_declined: RmaDeclined,
  received: Received,
  bench_result: BenchResult,
  shipped: Shipped,
  settled: Settled,
  reply: Reply,
};

/** A mail's two bodies from its stored props, parsed again: what is stored is not trusted for its shape. */
export async function renderMail<N extends TemplateName>(
  template: N,
  props: unknown,
  seller: string,
): Promise<{ html: string; text: string }> {
  const letter = LETTERS[template] as (p: object) => ReactElement;
  const html = await render(letter({ ...TEMPLATE_PROPS[template].parse(props), seller }));
  return { html, text: toPlainText(html) };
}
