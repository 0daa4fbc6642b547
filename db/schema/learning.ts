import { sql } from "drizzle-orm";
import {
  bigint,
  check,
  index,
  int,
  mysqlEnum,
  mysqlTable,
  primaryKey,
  text,
  tinyint,
  uniqueIndex,
  varchar,
} from "drizzle-orm/mysql-core";
import { DRIFT_KINDS, INFLUENCE_RUN_STATES, OWN_SIGNAL_STATES } from "../../lib/learning/codes";
import type { InfluenceResult } from "../../lib/learning/influence-schema";
import { bytes, exactDouble, instant, json, uuid } from "../columns";
import { people } from "./people";
import { labelLog, scorers } from "./scorers";

/** What a candidate would have lost on a row of the label log, predicting before the label. */
export const candidateLosses = mysqlTable(
  "candidate_losses",
  {
    scorerId: uuid()
      .notNull()
      .references(() => scorers.id),
    seq: bigint({ mode: "number" })
      .notNull()
      .references(() => labelLog.seq),
    /** Of fraud, as predicted before the label. */
    probability: exactDouble().notNull(),
    /** In nats. */
    loss: exactDouble().notNull(),
  },
  (table) => [primaryKey({ columns: [table.scorerId, table.seq] })],
);

/** The best fixed weights within the bound for the labels of the log up to a row: what regret is measured against. */
export const hindsightFits = mysqlTable(
  "hindsight_fits",
  {
    id: bigint({ mode: "number" }).primaryKey().autoincrement(),
    signalSetVersion: int().notNull(),
    weightBound: exactDouble().notNull(),
    /** Vectors are scaled down to it, as for the scorer that the fit is held against. */
    featureBound: exactDouble().notNull(),
    offset: exactDouble().notNull(),
    asOfSeq: bigint({ mode: "number" }).notNull(),
    labels: int().notNull(),
    /** Sum in nats over those labels. */
    loss: exactDouble().notNull(),
    weights: bytes({}).notNull(),
    computedAt: instant().notNull(),
  },
  (table) => [
    uniqueIndex("hindsight_fits_place").on(
      table.signalSetVersion,
      table.weightBound,
      table.featureBound,
      table.offset,
      table.asOfSeq,
    ),
  ],
);

/** A time at which recent losses or calibration left their band. */
export const driftWarnings = mysqlTable("drift_warnings", {
  id: uuid().primaryKey(),
  kind: mysqlEnum(DRIFT_KINDS).notNull(),
  scorerId: uuid()
    .notNull()
    .references(() => scorers.id),
  /** Row of the label log at which the statistic crossed its line. */
  seq: bigint({ mode: "number" }).notNull(),
  raisedAt: instant().notNull(),
  statistic: exactDouble().notNull(),
  line: exactDouble().notNull(),
  detail: json<Record<string, unknown>>()().notNull(),
  seenBy: uuid().references(() => people.id),
  seenAt: instant(),
});

/** What each person's labels do to the scorer in use, reckoned for the log up to a row. */
export const influenceRuns = mysqlTable(
  "influence_runs",
  {
    id: bigint({ mode: "number" }).primaryKey().autoincrement(),
    scorerId: uuid()
      .notNull()
      .references(() => scorers.id),
    asOfSeq: bigint({ mode: "number" }).notNull(),
    state: mysqlEnum(INFLUENCE_RUN_STATES).notNull(),
    /** 1 while it runs, else null: the unique index lets one server at a time be at it. */
    isRunning: tinyint().generatedAlwaysAs(sql`(if(state = 'running', 1, null))`, { mode: "stored" }),
    startedAt: instant().notNull(),
    /** Until when its server must have said that it is still at it. */
    leaseExpiresAt: instant().notNull(),
    finishedAt: instant(),
    result: json<InfluenceResult>()(),
  },
  (table) => [
    uniqueIndex("influence_runs_running").on(table.isRunning),
    index("influence_runs_newest").on(table.state, table.scorerId, table.asOfSeq),
  ],
);

/** The team's own signals: a formula over a payment's fields. A position, once given, is never given again. */
export const ownSignals = mysqlTable(
  "own_signals",
  {
    id: uuid().primaryKey(),
    key: varchar({ length: 48 }).notNull().unique(),
    name: varchar({ length: 80 }).notNull(),
    sentence: text().notNull(),
    formula: text().notNull(),
    /** Scaled to (value − middle) / reach, clipped to [−1, 1]. */
    middle: exactDouble().notNull(),
    reach: exactDouble().notNull(),
    state: mysqlEnum(OWN_SIGNAL_STATES).notNull(),
    /** Place behind the catalogue's coordinates; null until first switched on. */
    position: int().unique(),
    createdBy: uuid()
      .notNull()
      .references(() => people.id),
    createdAt: instant().notNull(),
    changedAt: instant().notNull(),
    revision: int().notNull().default(1),
    isArchived: tinyint().notNull().default(0),
  },
  (table) => [check("own_signals_position", sql`${table.state} = 'draft' or ${table.position} is not null`)],
);
