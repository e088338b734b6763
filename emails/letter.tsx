import { LAW_CAUTION } from "../lib/coverage/law";
import { Body, Container, Head, Hr, Html, Link, Preview, Section, Text } from "@react-email/components";
import type { CSSProperties, ReactNode } from "react";

/** The letter that every mail of ours is: paper, ink, one solid button at most, serials on tags. */
const INK = {
  paper: "#FAF8F3",
  sheet: "#FFFEFA",
  ink: "#15201B",
  ink2: "#435049",
  ink3: "#58645D",
  rule: "#DAD4C6",
};
const MASK = { face: "#0E5B42", text: "#FBFDF9" };
const UI = "'Atkinson Hyperlegible Next','Atkinson Hyperlegible',Verdana,'Segoe UI',sans-serif";
const MONO = "'Atkinson Hyperlegible Mono',ui-monospace,Menlo,Consolas,monospace";

const p: CSSProperties = { margin: "0 0 14px", fontSize: 17, lineHeight: "26px", color: INK.ink };

/** What every mail is told beside its own props. */
export type Sender = { seller: string };

export function Letter({
  seller,
  preview,
  children,
  replies = true,
  rights = false,
  law,
}: Sender & {
  preview: string;
  children: ReactNode;
  replies?: boolean;
  rights?: boolean;
  /** The notice for this buyer and country, where the letter knows them. */
  law?: { title: string; words: string };
}) {
  return (
    <Html lang="en">
      <Head>
        <meta name="color-scheme" content="light" />
      </Head>
      <Preview>{preview}</Preview>
      <Body style={{ margin: 0, padding: "28px 12px", background: INK.paper, fontFamily: UI }}>
        <Container style={{ maxWidth: 600, margin: "0 auto" }}>
          <Text style={{ margin: 0, fontSize: 15, lineHeight: "22px", fontWeight: 700, color: INK.ink }}>
            {seller}
          </Text>
          <Text style={{ margin: 0, fontSize: 13.5, lineHeight: "20px", color: INK.ink3 }}>
            Warranty and returns desk
          </Text>
          <Hr style={{ border: 0, borderTop: `2px solid ${INK.ink}`, margin: "12px 0 24px" }} />
          {children}
          <Hr style={{ border: 0, borderTop: `1px solid ${INK.rule}`, margin: "26px 0 14px" }} />
          {law ? (
            <Small>
              <strong>{law.title}.</strong> {law.words} {LAW_CAUTION}
            </Small>
          ) : rights ? (
            <Small>
              Your rights by law stand beside these terms; nothing here takes any of them away. If you are not
              sure what they are where you live, ask somebody licensed to advise you there.
            </Small>
          ) : null}
          <Small>
            {replies
              ? "Answer this mail and your words join the same record. Please write from the address that this came to."
              : "Nobody reads answers to this mail."}
          </Small>
        </Container>
      </Body>
    </Html>
  );
}

export const P = ({ children }: { children: ReactNode }) => <Text style={p}>{children}</Text>;

/** The answer first, in words. */
export const Answer = ({ children }: { children: ReactNode }) => (
  <Text style={{ ...p, fontSize: 25, lineHeight: "31px", fontWeight: 700, margin: "0 0 16px" }}>
    {children}
  </Text>
);

export const Head2 = ({ children }: { children: ReactNode }) => (
  <Text style={{ ...p, fontWeight: 650, margin: "22px 0 6px" }}>{children}</Text>
);

export const Small = ({ children }: { children: ReactNode }) => (
  <Text style={{ margin: "0 0 8px", fontSize: 13.5, lineHeight: "20px", color: INK.ink3 }}>{children}</Text>
);

/** Each on its own line, with a mark that plain text keeps. */
export function Lines({ of }: { of: readonly ReactNode[] }) {
  return (
    <Section style={{ margin: "0 0 14px" }}>
      {of.map((line, i) => (
        <Text key={i} style={{ ...p, margin: "0 0 6px", paddingLeft: 16, textIndent: -16 }}>
          – {line}
        </Text>
      ))}
    </Section>
  );
}

/** A serial or a number, as it stands on the part. */
export const Tag = ({ children }: { children: ReactNode }) => (
  <span
    style={{
      fontFamily: MONO,
      fontSize: 15,
      padding: "2px 8px",
      border: "1px solid #7B847D",
      background: INK.sheet,
      color: INK.ink,
      whiteSpace: "nowrap",
    }}
  >
    {children}
  </span>
);

/** Read aloud or typed from one screen to another. */
export const Code = ({ children }: { children: ReactNode }) => (
  <Text
    style={{
      fontFamily: MONO,
      fontSize: 34,
      lineHeight: "44px",
      letterSpacing: 1,
      margin: "4px 0 18px",
      color: INK.ink,
    }}
  >
    {children}
  </Text>
);

export function Act({ href, children }: { href: string; children: ReactNode }) {
  return (
    <Section style={{ margin: "8px 0 18px" }}>
      <Link
        href={href}
        style={{
          display: "inline-block",
          background: MASK.face,
          color: MASK.text,
          fontSize: 17,
          fontWeight: 650,
          padding: "13px 22px",
          textDecoration: "none",
          borderRadius: "0 2px 2px 2px",
        }}
      >
        {children}
      </Link>
    </Section>
  );
}

/** Read before hands go in: framed by two strong rules, and it does not shout. */
export function Cautions({ of }: { of: readonly string[] }) {
  if (of.length === 0) return null;
  return (
    <Section
      style={{
        borderTop: `2px solid ${INK.ink}`,
        borderBottom: `2px solid ${INK.ink}`,
        padding: "10px 0 4px",
        margin: "18px 0",
      }}
    >
      <Text style={{ ...p, fontWeight: 700, margin: "0 0 6px" }}>Before hands go in</Text>
      <Lines of={of} />
    </Section>
  );
}

export const Greeting = ({ name }: { name: string }) => (
  <P>{name && !name.includes("@") ? `Dear ${name},` : "Hello,"}</P>
);
export const Sign = ({ by, seller }: { by?: string } & Sender) => (
  <P>
    {by ? (
      <>
        {by}
        <br />
      </>
    ) : null}
    {seller}
  </P>
);
