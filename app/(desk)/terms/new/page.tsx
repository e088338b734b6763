import type { Metadata } from "next";
import Link from "next/link";
import { requireStaff } from "@/app/_edge/ctx";
import { NewTermsForm } from "./form";

export const metadata: Metadata = { title: "New terms" };

export default async function NewTerms() {
  await requireStaff("admin");
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>Draft new terms</h1>
          <p>
            They begin without a clause. Nothing is sold under them before their first issue is published.
          </p>
        </div>
      </div>
      <NewTermsForm />
      <p className="pact">
        <Link href="/terms">All terms</Link>
      </p>
    </main>
  );
}
