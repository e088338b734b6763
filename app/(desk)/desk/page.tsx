import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { DeskBoard } from "./board";
import { capital, countWord, plural, showLongDay, showClock } from "@/lib/base/show";
import { openGoodwills } from "@/lib/coverage/goodwill.queries";
import { heldList } from "@/lib/mail/queries";
import { may } from "@/lib/auth/rules";
import { deskView } from "@/lib/tickets/desk.queries";

export const metadata: Metadata = { title: "Desk" };

export default async function Desk({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff("agent", "manager", "admin", "warehouse");
  const query = await searchParams;
  const q = typeof query.q === "string" ? query.q.slice(0, 120) : "";
  const first = await deskView(ctx, { q });
  const held = may(ctx, "mail.held") ? await heldList(ctx) : [];
  const waits = (await openGoodwills(ctx))?.toAnswer ?? 0;
  return (
    <main className="desk" id="main">
      <DeskBoard
        first={first}
        q={q}
        when={`${showLongDay(ctx.now, first.zone)}, ${showClock(ctx.now, first.zone)}.`}
        held={held
          .slice(0, 5)
          .map((h) => ({ id: h.heldId, subject: h.subject, fromEmail: h.fromEmail, reason: h.reason }))}
        heldCount={held.length}
        goodwill={
          waits === 0
            ? null
            : `${capital(countWord(waits))} ${plural(waits, "ask for goodwill waits", "asks for goodwill wait")} for you.`
        }
      />
    </main>
  );
}
