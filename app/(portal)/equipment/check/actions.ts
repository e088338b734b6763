"use server";
import { answerCheck } from "@/app/_edge/check";
import { requireCustomer } from "@/app/_edge/ctx";
import type { CheckShown } from "@/components/coverage/check-panel";

export async function check(_state: CheckShown, form: FormData): Promise<CheckShown> {
  await requireCustomer();
  return answerCheck(form, { staff: false, reports: true });
}
