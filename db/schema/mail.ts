import { index, int, mysqlEnum, mysqlTable, text, tinyint, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import { MAIL_KINDS, MAIL_STATES } from "../../lib/mail/codes.ts";
import { bytes, instant, json, uuid } from "../columns.ts";
import { people } from "./people.ts";

export const outbox = mysqlTable(
  "outbox",
  {
    id: uuid().primaryKey(),
    /** Kind, period and person: the same message cannot be queued twice. */
    dedupeKey: varchar({ length: 160 }).notNull(),
    kind: mysqlEnum(MAIL_KINDS).notNull(),
    personId: uuid().notNull().references(() => people.id),
    recipient: varchar({ length: 254 }).notNull(),
    subject: varchar({ length: 200 }).notNull(),
    html: text().notNull(),
    text: text().notNull(),
    headers: json<Record<string, string>>()().notNull(),
    messageId: varchar({ length: 120 }).notNull(),
    state: mysqlEnum(MAIL_STATES).notNull(),
    attempts: int().notNull().default(0),
    nextAttemptAt: instant().notNull(),
    leaseOwner: varchar({ length: 64 }),
    createdAt: instant().notNull(),
    sentAt: instant(),
    problem: varchar({ length: 400 }),
  },
  (table) => [uniqueIndex("outbox_dedupe").on(table.dedupeKey), index("outbox_due").on(table.state, table.nextAttemptAt)],
);

export const summaryRecipients = mysqlTable("summary_recipients", {
  personId: uuid().primaryKey().references(() => people.id),
  /** ISO weekday, 1 = Monday, and hour in the person's own time zone. */
  weekday: tinyint().notNull(),
  hour: tinyint().notNull(),
  subscribed: tinyint().notNull().default(1),
  /** SHA-256 of the secret in the unsubscribe address. */
  unsubscribeHash: bytes({ length: 32, fixed: true }),
  changedAt: instant().notNull(),
});
