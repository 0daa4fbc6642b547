import { sql } from "drizzle-orm";
import {
  check,
  index,
  int,
  mysqlEnum,
  mysqlTable,
  primaryKey,
  tinyint,
  uniqueIndex,
  varchar,
} from "drizzle-orm/mysql-core";
import { PERSON_STATES, ROLES, type Scope } from "../../lib/auth/codes";
import { bytes, instant, json, uuid } from "../columns";

export const people = mysqlTable(
  "people",
  {
    id: uuid().primaryKey(),
    email: varchar({ length: 254 }).notNull(),
    name: varchar({ length: 120 }).notNull(),
    passwordHash: varchar({ length: 255 }).notNull(),
    passwordIsOneTime: tinyint().notNull().default(0),
    state: mysqlEnum(PERSON_STATES).notNull().default("active"),
    /** Raised by every change of roles, state or password, so that older sessions end at once. */
    sessionVersion: int().notNull().default(1),
    failedSignIns: int().notNull().default(0),
    lockedUntil: instant(),
    timeZone: varchar({ length: 64 }).notNull().default("UTC"),
    createdAt: instant().notNull(),
    lastSignInAt: instant(),
  },
  (table) => [
    uniqueIndex("people_email").on(table.email),
    check("people_email_lower", sql`${table.email} = lower(${table.email})`),
  ],
);

export const personRoles = mysqlTable(
  "person_roles",
  {
    personId: uuid()
      .notNull()
      .references(() => people.id),
    role: mysqlEnum(ROLES).notNull(),
    grantedAt: instant().notNull(),
    grantedBy: uuid().references(() => people.id),
  },
  (table) => [primaryKey({ columns: [table.personId, table.role] })],
);

export const apiKeys = mysqlTable(
  "api_keys",
  {
    id: uuid().primaryKey(),
    name: varchar({ length: 80 }).notNull(),
    /** Namespace of the external identifiers that come in through this key. */
    source: varchar({ length: 64 }).notNull(),
    /** SHA-256 of the key: the key itself has 256 random bits, so a slow hash would add nothing. */
    hash: bytes({ length: 32, fixed: true }).notNull(),
    scopes: json<Scope[]>()().notNull(),
    actsForPersonId: uuid().references(() => people.id),
    createdAt: instant().notNull(),
    lastUsedAt: instant(),
    revokedAt: instant(),
  },
  (table) => [uniqueIndex("api_keys_hash").on(table.hash), uniqueIndex("api_keys_name").on(table.name)],
);

/** Sessions that were signed out of before their token ran out; rows older than the longest session are of no use. */
export const endedSessions = mysqlTable(
  "ended_sessions",
  {
    id: uuid().primaryKey(),
    endedAt: instant().notNull(),
  },
  (table) => [index("ended_sessions_age").on(table.endedAt)],
);

export const idempotencyKeys = mysqlTable(
  "idempotency_keys",
  {
    /** Person or key, so that two senders may use the same key string. */
    actor: varchar({ length: 80 }).notNull(),
    key: varchar({ length: 128 }).notNull(),
    requestHash: bytes({ length: 32, fixed: true }).notNull(),
    answer: json<unknown>()(),
    /** 0 while the figures worked out after the commit are still missing from the answer. */
    complete: tinyint().notNull().default(0),
    createdAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.actor, table.key] }),
    index("idempotency_keys_age").on(table.createdAt),
  ],
);

export const settings = mysqlTable("settings", {
  key: varchar({ length: 64 }).primaryKey(),
  value: json<unknown>()().notNull(),
  changedAt: instant().notNull(),
});
