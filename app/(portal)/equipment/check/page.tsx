import type { Metadata } from "next";
import { requireCustomer } from "@/app/_edge/ctx";
import { civilDayIn } from "@/lib/base/civil";
import { env } from "@/lib/env";
import { EquipmentCheck } from "./form";

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
      <EquipmentCheck today={civilDayIn(ctx.now, env().MENDBAY_ZONE)} formId={ctx.newId()} />
    </div>
  );
}
