import {
  index,
  int,
  mysqlEnum,
  mysqlTable,
  text,
  tinyint,
  uniqueIndex,
  varchar,
} from "drizzle-orm/mysql-core";
import { MAIL_KINDS, MAIL_STATES } from "../../lib/mail/codes";
import { bytes, instant, json, uuid } from "../columns";
import { people } from "./people";

export const outbox = mysqlTable(
  "outbox",
  {
    id: uuid().primaryKey(),
    /** Kind, period and person: the same message cannot be queued twice. */
    dedupeKey: varchar({ length: 160 }).notNull(),
    kind: mysqlEnum(MAIL_KINDS).notNull(),
    /** What it is about where it comes once a period: the ISO week of a summary. */
    period: varchar({ length: 16 }),
    personId: uuid()
      .notNull()
      .references(() => people.id),
    recipient: varchar({ length: 254 }).notNull(),
    subject: varchar({ length: 200 }).notNull(),
    html: text().notNull(),
    text: text().notNull(),
    headers: json<Record<string, string>>()().notNull(),
    messageId: varchar({ length: 120 }).notNull(),
    state: mysqlEnum(MAIL_STATES).notNull(),
    attempts: int().notNull().default(0),
    /** While queued: when to try; while sending: when the sender must have reported, or the send is uncertain. */
    nextAttemptAt: instant().notNull(),
    leaseOwner: varchar({ length: 64 }),
    createdAt: instant().notNull(),
    sentAt: instant(),
    problem: varchar({ length: 400 }),
    /** SHA-256 of the secret in this message's unsubscribe address. */
    unsubscribeHash: bytes({ length: 32, fixed: true }),
  },
  (table) => [
    uniqueIndex("outbox_dedupe").on(table.dedupeKey),
    index("outbox_due").on(table.state, table.nextAttemptAt),
    // Summaries as sent, newest first.
    index("outbox_kind").on(table.kind, table.createdAt),
    uniqueIndex("outbox_unsubscribe").on(table.unsubscribeHash),
  ],
);

export const summaryRecipients = mysqlTable("summary_recipients", {
  personId: uuid()
    .primaryKey()
    .references(() => people.id),
  /** ISO weekday, 1 = Monday, and hour in the person's own time zone. */
  weekday: tinyint().notNull(),
  hour: tinyint().notNull(),
  subscribed: tinyint().notNull().default(1),
  /** Mornings before this moment are not made up for. */
  subscribedAt: instant().notNull(),
  changedAt: instant().notNull(),
});
