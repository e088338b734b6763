import type { Metadata } from "next";
import { Button } from "@/components/ui/button";
import { Field } from "@/components/ui/field";
import { CODE_MINUTES, safeNext } from "@/lib/auth/schema";
import { Hang } from "../../hang";

export const metadata: Metadata = { title: "Look at your mail" };

const ERRORS: Record<string, string> = {
  code: "The code has ten characters, such as 7K2M9-Q4X1B.",
  often: "Too many tries. Ask for a new code in a quarter of an hour.",
};

export default async function Sent({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const query = await searchParams;
  const email = typeof query.email === "string" ? query.email : "";
  const next = typeof query.next === "string" ? safeNext(query.next) : "/";
  const error = typeof query.error === "string" ? ERRORS[query.error] : undefined;
  return (
    <Hang>
      <h1>Look at your mail</h1>
      <p className="hang-text">
        If <b>{email || "this address"}</b> is known to us, a link is on its way. It works once, for{" "}
        {CODE_MINUTES} minutes.
      </p>
      <form action="/enter" method="post">
        <input type="hidden" name="email" value={email} />
        <input type="hidden" name="next" value={next} />
        <Field
          label="Or type the code from the mail"
          name="code"
          mono
          hint="Capitals and dash do not matter."
          autoComplete="one-time-code"
          autoCapitalize="characters"
          error={error}
          required
        />
        <Button type="submit" className="hang-send">
          Sign in with the code
        </Button>
      </form>
      <p className="hang-foot">
        Wrong address? <a href="/sign-in">Start again</a>
      </p>
    </Hang>
  );
}
