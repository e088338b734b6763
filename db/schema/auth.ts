import { index, integer, pgEnum, pgTable, primaryKey, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import { ROLES } from "../../lib/ctx";
import { id, instant } from "./columns";

export const roleName = pgEnum("role_name", ROLES);

export const users = pgTable(
  "user",
  {
    id: id(),
    name: text("name"),
    email: text("email").notNull(),
    emailVerified: instant("email_verified"),
    image: text("image"),
    /** How staff see this person beside the name: "warranty desk", "receiving, door 2". */
    post: text("post"),
    theme: text("theme", { enum: ["light", "dark", "system"] })
      .notNull()
      .default("system"),
    endedAt: instant("ended_at"),
  },
  (t) => [uniqueIndex("user_email_once").on(t.email)],
);

export const userRoles = pgTable(
  "user_role",
  {
    userId: uuid("user_id")
      .notNull()
      .references(() => users.id, { onDelete: "cascade" }),
    role: roleName("role").notNull(),
  },
  (t) => [primaryKey({ columns: [t.userId, t.role] })],
);

/** Required by the adapter; no outside provider is used, so no row is ever made. */
export const authAccounts = pgTable(
  "auth_account",
  {
    userId: uuid("user_id")
      .notNull()
      .references(() => users.id, { onDelete: "cascade" }),
    type: text("type").notNull(),
    provider: text("provider").notNull(),
    providerAccountId: text("provider_account_id").notNull(),
    refresh_token: text("refresh_token"),
    access_token: text("access_token"),
    expires_at: integer("expires_at"),
    token_type: text("token_type"),
    scope: text("scope"),
    id_token: text("id_token"),
    session_state: text("session_state"),
  },
  (t) => [primaryKey({ columns: [t.provider, t.providerAccountId] })],
);

export const sessions = pgTable(
  "session",
  {
    sessionToken: text("session_token").primaryKey(),
    userId: uuid("user_id")
      .notNull()
      .references(() => users.id, { onDelete: "cascade" }),
    expires: instant("expires").notNull(),
    /** Set when a second factor was given in this session; staff screens will ask for it. */
    secondFactorAt: instant("second_factor_at"),
    createdAt: instant("created_at").notNull().defaultNow(),
  },
  (t) => [index("session_of_user").on(t.userId)],
);

export const verificationTokens = pgTable(
  "verification_token",
  {
    identifier: text("identifier").notNull(),
    token: text("token").notNull(),
    expires: instant("expires").notNull(),
  },
  (t) => [primaryKey({ columns: [t.identifier, t.token] })],
);

/** Counts tries per key (an address, a network) and window, so that guessing is slow. */
export const attempts = pgTable(
  "attempt",
  {
    key: text("key").notNull(),
    windowStart: instant("window_start").notNull(),
    count: integer("count").notNull(),
  },
  (t) => [primaryKey({ columns: [t.key, t.windowStart] })],
);
