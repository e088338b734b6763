import { redirect } from "next/navigation";
import { currentCtx } from "./_edge/ctx";

/** Everybody to where their work is. */
export default async function Home() {
  const { actor } = await currentCtx();
  if (actor.kind === "customer") redirect("/equipment");
  if (actor.kind !== "staff") redirect("/sign-in");
  if (actor.roles.includes("agent")) redirect("/desk");
  if (actor.roles.includes("warehouse")) redirect("/dock");
  if (actor.roles.includes("manager")) redirect("/rates");
  redirect("/ledger");
}
