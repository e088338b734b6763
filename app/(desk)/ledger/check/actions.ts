"use server";
import { answerCheck } from "@/app/_edge/check";
import { requireStaff } from "@/app/_edge/ctx";
import { may } from "@/lib/auth/rules";
import type { CheckShown } from "@/components/coverage/check-panel";

export async function check(_state: CheckShown, form: FormData): Promise<CheckShown> {
  const ctx = await requireStaff();
  return answerCheck(form, { staff: true, reports: may(ctx, "ticket.open") });
}
