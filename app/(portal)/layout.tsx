import Link from "next/link";
import type { ReactNode } from "react";
import { leave } from "@/app/(door)/actions";
import { requireCustomer } from "@/app/_edge/ctx";
import { accountById } from "@/lib/ledger/queries";
import { env } from "@/lib/env";
import { showLongDay } from "@/lib/base/show";

/** The portal reads like a letter: letterhead above, the way round below. */
export default async function PortalLayout({ children }: { children: ReactNode }) {
  const ctx = await requireCustomer();
  const account = await accountById(ctx, ctx.actor.accountId);
  return (
    <div className="portal">
      <div className="letter wide two">
        <header className="lh">
          <div>
            <b>{env().MENDBAY_SELLER}</b>
            Warranty desk
          </div>
          <div className="r">
            {account?.name}
            <br />
            {showLongDay(ctx.now, account?.zone ?? env().MENDBAY_ZONE)}
          </div>
        </header>
        <nav className="pnav" aria-label="Your pages">
          <Link href="/equipment">Your equipment</Link>
          <Link href="/cases">Your cases</Link>
          <form action={leave}>
            <button type="submit" className="linklike">
              Sign out
            </button>
          </form>
        </nav>
        <main id="main">{children}</main>
      </div>
    </div>
  );
}
