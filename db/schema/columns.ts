import { timestamp, uuid } from "drizzle-orm/pg-core";

/** Random id, given by `ctx.newId()`; the default serves rows that no command makes. */
export const id = () => uuid("id").primaryKey().defaultRandom();

/** An instant, always with zone. Commands give `ctx.now`: no default, so that none forgets. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, mode: "date", precision: 3 });
