import "server-only";
import { cache } from "react";
import { currentCtx } from "@/app/_edge/ctx";
import { personView, type PersonView } from "@/lib/auth/queries";

/**
 * What the chrome shows of the person and the theme they chose, read once a request. It never fails:
 * the outermost layout stands on it, and must still stand when the page below reports a fault.
 */
export const person = cache(async (): Promise<PersonView> => {
  const stranger: PersonView = { post: null, theme: "system" };
  try {
    const { actor } = await currentCtx();
    if (actor.kind !== "staff" && actor.kind !== "customer") return stranger;
    return await personView(actor.userId);
  } catch {
    return stranger;
  }
});
