"use server";
import { answerCheck, type CheckState } from "@/app/_edge/check";
import { requireCustomer } from "@/app/_edge/ctx";

export async function check(_state: CheckState, form: FormData): Promise<CheckState> {
  await requireCustomer();
  return answerCheck(form, { staff: false, reports: true });
}
