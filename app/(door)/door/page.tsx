import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { Button } from "@/components/ui/button";
import { demoPeople } from "@/lib/auth/queries";
import { env } from "@/lib/env";
import { Hang } from "../hang";

export const metadata: Metadata = { title: "Demo door" };

const ROLE_WORDS: Record<string, string> = {
  agent: "agent: the desk",
  warehouse: "warehouse: dock and bench",
  manager: "manager: failure rates",
  admin: "admin: ledger, imports, terms",
  customer: "customer: the portal",
};

export default async function Door() {
  if (env().MENDBAY_DEMO !== "1") notFound();
  const people = await demoPeople();
  return (
    <Hang wide>
      <h1>Enter as one of the demo&rsquo;s people</h1>
      <p className="hang-text">
        Each enters by a one-time code, as a mailed link would. Everything here is invented.
      </p>
      {people.length === 0 ? (
        <p className="err">The demo has no people yet. Run npm run demo:reset.</p>
      ) : null}
      <ul className="door-list">
        {people.map((p) => (
          <li key={p.email}>
            <div>
              <b>{p.name}</b>
              <span className="s q">
                {p.roles.map((r) => ROLE_WORDS[r] ?? r).join(", ")}
                {p.detail ? `, ${p.detail}` : ""}
              </span>
            </div>
            <form action="/enter" method="post">
              <input type="hidden" name="demo" value="1" />
              <input type="hidden" name="email" value={p.email} />
              <Button type="submit" kind="line">
                Enter<span className="vh"> as {p.name}</span>
              </Button>
            </form>
          </li>
        ))}
      </ul>
    </Hang>
  );
}
