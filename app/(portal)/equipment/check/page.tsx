import type { Metadata } from "next";
import { requireCustomer } from "@/app/_edge/ctx";
import { CheckPanel } from "@/components/coverage/check-panel";
import { civilDayIn } from "@/lib/base/civil";
import { env } from "@/lib/env";
import { check } from "./actions";

export const metadata: Metadata = { title: "Check many serials" };

export default async function Check() {
  const ctx = await requireCustomer();
  return (
    <div className="ckpage">
      <h1>Check many serials at once</h1>
      <p>
        Paste what you have, or send a file. Each line is answered by itself, and from the answer you may
        report a fault for several units together.
      </p>
      <CheckPanel
        check={check}
        today={civilDayIn(ctx.now, env().MENDBAY_ZONE)}
        formId={ctx.newId()}
        csv="/equipment/check/csv"
        back={{ href: "/equipment", words: "Back to your equipment" }}
        starts="self"
        customers={false}
      />
    </div>
  );
}
