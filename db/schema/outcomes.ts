import { bigint, char, index, mysqlEnum, mysqlTable, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import { BEARERS, OUTCOME_KINDS, OUTCOME_STAGES, REASON_FAMILIES } from "../../lib/outcomes/codes.ts";
import { bytes, instant, uuid } from "../columns.ts";
import { transactions } from "./transactions.ts";

export const outcomes = mysqlTable(
  "outcomes",
  {
    id: uuid().primaryKey(),
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
    /** SHA-256 over the outcome as sent: the same one again is a duplicate. */
    contentHash: bytes({ length: 32, fixed: true }).notNull(),
    appliedAt: instant(),
  },
  (table) => [
    uniqueIndex("outcomes_content").on(table.contentHash),
    index("outcomes_external").on(table.externalId),
    index("outcomes_transaction").on(table.transactionId),
  ],
);
