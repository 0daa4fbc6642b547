import { sql } from "drizzle-orm";
import {
  bigint,
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
import { LABEL_KINDS } from "../../lib/decisions/codes";
import { SCORER_ROLES } from "../../lib/learning/codes";
import type { ScorerOptions } from "../../lib/scorer";
import { bytes, exactDouble, instant, json, uuid } from "../columns";
import { cases, decisions } from "./cases";
import { people } from "./people";
import { transactions } from "./transactions";

export const scorers = mysqlTable(
  "scorers",
  {
    id: uuid().primaryKey(),
    name: varchar({ length: 80 }).notNull(),
    method: varchar({ length: 32 }).notNull(),
    /** Retired scorers were in use once and explain the scores they gave; dropped ones never were. */
    role: mysqlEnum(SCORER_ROLES).notNull(),
    /** 1 for the one scorer in use, else null: the unique index allows one. */
    inUse: tinyint().generatedAlwaysAs(sql`(if(role = 'in_use', 1, null))`, { mode: "stored" }),
    signalSetVersion: int().notNull(),
    options: json<ScorerOptions>()().notNull(),
    /** Grows with every label, undo, correction or change of options. */
    version: bigint({ mode: "number" }).notNull(),
    /** Last row of the label log that the state has taken in. */
    logSeq: bigint({ mode: "number" }).notNull(),
    state: bytes({}).notNull(),
    cumulativeLoss: exactDouble().notNull(),
    /** Part of it that those in use before had lost beyond what this one lost beside them; null: none. */
    carriedLoss: exactDouble(),
    /** Last row of the log when it was made: what a candidate lost up to there was reckoned afterwards. */
    startedSeq: bigint({ mode: "number" }).notNull().default(0),
    createdAt: instant(),
    createdBy: uuid().references(() => people.id),
    changedAt: instant().notNull(),
  },
  (table) => [uniqueIndex("scorers_in_use").on(table.inUse)],
);

/** The state right behind a place of the log, kept to make re-runs short. */
export const scorerSnapshots = mysqlTable(
  "scorer_snapshots",
  {
    scorerId: uuid()
      .notNull()
      .references(() => scorers.id),
    /** Place of the last label folded in. */
    place: bigint({ mode: "number" }).notNull(),
    state: bytes({}).notNull(),
  },
  (table) => [primaryKey({ columns: [table.scorerId, table.place] })],
);

/**
 * Append-only and in commit order. A row without `place` stands at its own place; a row with one says
 * what now holds at that earlier place (label 0: nothing). The state is the fold over places in order.
 */
export const labelLog = mysqlTable(
  "label_log",
  {
    seq: bigint({ mode: "number" }).primaryKey(),
    place: bigint({ mode: "number" }),
    kind: mysqlEnum(LABEL_KINDS).notNull(),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    caseId: uuid().references(() => cases.id),
    decisionId: uuid().references(() => decisions.id),
    outcomeId: uuid(),
    personId: uuid().references(() => people.id),
    label: tinyint().notNull(),
    weight: exactDouble().notNull(),
    vector: bytes({ length: 4096 }).notNull(),
    signalSetVersion: int().notNull(),
    /** Loss in nats of the score given before the label; null where nothing was predicted (undo, correction). */
    loss: exactDouble(),
    scorerVersion: bigint({ mode: "number" }).notNull(),
    at: instant().notNull(),
  },
  (table) => [
    index("label_log_transaction").on(table.transactionId),
    index("label_log_place").on(table.place),
    index("label_log_person").on(table.personId),
    index("label_log_at").on(table.at),
    check("label_log_label", sql`${table.label} in (-1, 0, 1)`),
    check("label_log_place_earlier", sql`${table.place} < ${table.seq}`),
  ],
);

/** Entities touched by a new label, whose waiting cases get fresh history signals. */
export const signalRefreshes = mysqlTable("signal_refreshes", {
  id: bigint({ mode: "number" }).primaryKey().autoincrement(),
  transactionId: uuid()
    .notNull()
    .references(() => transactions.id),
  createdAt: instant().notNull(),
});
