import type { Metadata } from "next";
import { Button } from "@/components/ui/button";
import { safeNext } from "@/lib/auth/schema";
import { Hang } from "../../hang";

export const metadata: Metadata = { title: "One more press" };

/** Consumes nothing: only the button's POST does. */
export default async function Confirm({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const query = await searchParams;
  const text = (name: string) => (typeof query[name] === "string" ? query[name] : "");
  const [email, token] = [text("email"), text("token")];
  const next = safeNext(text("callbackUrl"));
  if (!email || !token) {
    return (
      <Hang>
        <h1>This link is not whole</h1>
        <p className="hang-text">A mail program may have cut it. Type the code from the mail instead.</p>
        <p className="hang-foot">
          <a href="/sign-in">Ask for a new one</a>
        </p>
      </Hang>
    );
  }
  return (
    <Hang>
      <h1>One more press</h1>
      <p className="hang-text">
        You are about to sign in as <b>{email}</b>.
      </p>
      <form action="/enter" method="post">
        <input type="hidden" name="email" value={email} />
        <input type="hidden" name="code" value={token} />
        <input type="hidden" name="next" value={next} />
        <Button type="submit" className="hang-send">
          Sign in
        </Button>
      </form>
      <p className="hang-foot">Not you? Close this page. Nothing has happened.</p>
    </Hang>
  );
}
