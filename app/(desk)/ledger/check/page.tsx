import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { CheckPanel } from "@/components/coverage/check-panel";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { env } from "@/lib/env";
import { check } from "./actions";

export const metadata: Metadata = { title: "Check many serials" };

export default async function Check() {
  const ctx = await requireStaff();
  return (
    <main id="main" className="desk ckpage">
      <div className="deskhead">
        <div>
          <h1>Check many serials at once</h1>
          <p>
            Each line is answered by itself: the unit, its cover on a day, an open RMA, and what is doubtful.
            A wrong line never holds up a right one.
          </p>
        </div>
      </div>
      <CheckPanel
        check={check}
        today={civilDayIn(ctx.now, env().MENDBAY_ZONE)}
        formId={ctx.newId()}
        csv="/ledger/check/csv"
        back={{ href: "/ledger", words: "Back to the ledger" }}
        starts={may(ctx, "ticket.open") ? "for_customer" : null}
        customers
      />
    </main>
  );
}
