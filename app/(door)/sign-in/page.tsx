import type { Metadata } from "next";
import { safeNext } from "@/lib/auth/schema";
import { env } from "@/lib/env";
import { Hang } from "../hang";
import { AskForm } from "./form";

export const metadata: Metadata = { title: "Sign in" };

const ERRORS: Record<string, string> = {
  Verification: "This link or code was used already, or is older than ten minutes. Ask for a new one.",
  AccessDenied: "This person's access has been ended. Ask an admin.",
};

export default async function SignIn({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const query = await searchParams;
  const error =
    typeof query.error === "string"
      ? (ERRORS[query.error] ?? "Signing in did not work. Ask for a new link.")
      : null;
  const next = typeof query.next === "string" ? safeNext(query.next) : "";
  return (
    <Hang>
      <h1>Sign in to {env().MENDBAY_SELLER}</h1>
      {error ? (
        <p className="err hang-error" role="alert">
          {error}
        </p>
      ) : null}
      <AskForm next={next} />
      {env().MENDBAY_DEMO === "1" ? (
        <p className="hang-foot">
          This is a demo. <a href="/door">Enter as one of its people</a>
        </p>
      ) : (
        <p className="hang-foot">No mail after a minute? Look among unwanted mail, then ask again.</p>
      )}
    </Hang>
  );
}
