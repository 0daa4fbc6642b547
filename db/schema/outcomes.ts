import { bigint, char, index, mysqlEnum, mysqlTable, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import { BEARERS, OUTCOME_KINDS, OUTCOME_STAGES, REASON_FAMILIES } from "../../lib/outcomes/codes";
import { bytes, instant, uuid } from "../columns";
import { transactions } from "./transactions";

export const outcomes = mysqlTable(
  "outcomes",
  {
    id: uuid().primaryKey(),
    /** Namespace of the sender's identifiers; empty where a person brought it in. */
    source: varchar({ length: 64 }).notNull(),
    externalId: varchar({ length: 64 }).notNull(),
    /** Null until the transaction it names arrives. */
    transactionId: uuid().references(() => transactions.id),
    kind: mysqlEnum(OUTCOME_KINDS).notNull(),
    reasonFamily: mysqlEnum(REASON_FAMILIES),
    stage: mysqlEnum(OUTCOME_STAGES),
    bearer: mysqlEnum(BEARERS),
    occurredAt: instant().notNull(),
    receivedAt: instant().notNull(),
    amountMinor: bigint({ mode: "number" }),
    currency: char({ length: 3 }),
    reference: varchar({ length: 64 }),
    /** What it brings back, in minor units of the base currency; booked while the payment's label is fraudulent. */
    recoversBaseMinor: bigint({ mode: "number" }),
    /** SHA-256 over the source and the outcome as sent: the same one again is a duplicate. */
    contentHash: bytes({ length: 32, fixed: true }).notNull(),
    appliedAt: instant(),
    /** Why it could not be applied when its transaction arrived. */
    problem: varchar({ length: 400 }),
  },
  (table) => [
    uniqueIndex("outcomes_content").on(table.contentHash),
    index("outcomes_external").on(table.externalId),
    index("outcomes_transaction").on(table.transactionId),
  ],
);
