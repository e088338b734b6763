import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { civilDayIn } from "@/lib/base/civil";
import { showNear } from "@/lib/base/show";
import { setAsideList } from "@/lib/dock/queries";
import { env } from "@/lib/env";
import { expectedRmas } from "@/lib/rma/queries";
import { Station, type Expected } from "./station";

export const metadata: Metadata = { title: "Dock" };

export default async function Dock() {
  const ctx = await requireStaff("warehouse");
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const rmas = await expectedRmas(ctx, 12);
  const expected: Expected[] = rmas.map((r) => {
    const line = r.lines.find((l) => l.state === "open") ?? r.lines[0]!;
    const late = r.expiresOn !== null && r.expiresOn < today;
    return {
      rmaId: r.id,
      number: r.number,
      serial: line.serial,
      more: r.lines.filter((l) => l.state === "open").length - 1,
      when:
        r.state === "in_transit"
          ? "on its way"
          : r.expiresOn
            ? late
              ? `quiet since ${showNear(r.expiresOn, today)}`
              : `by ${showNear(r.expiresOn, today)}`
            : "",
      late,
      detail: `${line.slot ?? line.modelName}, ${r.accountName}`,
    };
  });
  const aside = (await setAsideList(ctx, 6)).map((d) => ({
    id: d.id,
    scanned: d.scanned,
    expected: d.expected,
    place: d.place,
    rmaNumber: d.rmaNumber,
  }));
  return <Station expected={expected} aside={aside} />;
}
