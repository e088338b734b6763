import "server-only";
import { revalidatePath } from "next/cache";
import { headers } from "next/headers";
import { redirect } from "next/navigation";
import { refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { currentCtx } from "./ctx";
import { formInput, stateOf, type FormState } from "./form";

/**
 * A server action from a command: form → input → Result → form state. Works without JavaScript:
 * refused, the page comes again with the words and what was typed; done, `after` names the path to
 * go to, or nothing to stay.
 *
 *     export const send = action((ctx, input) => reply(ctx, input), (value) => `/cases/${value.number}`);
 */
export function action<T>(
  run: (ctx: Ctx, input: Record<string, unknown>, form: FormData) => Promise<Result<T>>,
  after?: (value: T, input: Record<string, unknown>) => string | undefined,
): (state: FormState<T>, form: FormData) => Promise<FormState<T>> {
  return async (_state, form) => {
    // A browser says where a request comes from; another site's form is refused whatever cookie it carries.
    if ((await headers()).get("sec-fetch-site") === "cross-site")
      return stateOf(refuse("forbidden", "This form was sent from another site."), form);
    const input = formInput(form);
    const result = await run(await currentCtx(), input, form);
    const to = result.ok ? after?.(result.value, input) : undefined;
    if (to) {
      // A place on the page that is shown already is no new page to the browser: what it holds is old now.
      if (to.includes("#")) revalidatePath(to.replace(/[?#].*$/, ""));
      redirect(to);
    }
    return stateOf(result, form);
  };
}
