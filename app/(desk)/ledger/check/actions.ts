"use server";
import { answerCheck, type CheckState } from "@/app/_edge/check";
import { requireStaff } from "@/app/_edge/ctx";
import { may } from "@/lib/auth/rules";

export async function check(_state: CheckState, form: FormData): Promise<CheckState> {
  const ctx = await requireStaff();
  return answerCheck(form, { staff: true, reports: may(ctx, "ticket.open") });
}
