import { sql } from "drizzle-orm";
import {
  bigint,
  check,
  double,
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
import { CASE_KINDS, CASE_STATES } from "../../lib/cases/codes";
import { CONFIDENCES, DECISION_KINDS, TYPOLOGIES, VERDICTS } from "../../lib/decisions/codes";
import { ZONES } from "../../lib/policy/codes";
import { bytes, instant, json, uuid } from "../columns";
import { apiKeys, people } from "./people";
import { scores, transactions } from "./transactions";

export const cases = mysqlTable(
  "cases",
  {
    id: uuid().primaryKey(),
    /** Short number for people to say aloud; also the order in which ties in the ranking break. */
    number: bigint({ mode: "number" }).notNull().autoincrement().unique(),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    kind: mysqlEnum(CASE_KINDS).notNull(),
    state: mysqlEnum(CASE_STATES).notNull(),
    zone: mysqlEnum(ZONES).notNull(),
    scoreId: bigint({ mode: "number" })
      .notNull()
      .references(() => scores.id),
    policyVersion: int().notNull(),
    /** Known probability with which a sample was drawn; null for other kinds. */
    sampleProbability: double(),
    openedAt: instant().notNull(),
    dueAt: instant().notNull(),
    lapsesAt: instant().notNull(),
    assignedTo: uuid().references(() => people.id),
    claimedBy: uuid().references(() => people.id),
    claimedAt: instant(),
    claimExpiresAt: instant(),
    waitUntil: instant(),
    /** Set while the case is a supervisor's: a claim given back then returns it to them, not to everybody. */
    escalatedAt: instant(),
    decidedAt: instant(),
    /** Raised by every change of the row, not by a new score: a decision names the revision it saw. */
    revision: int().notNull().default(1),
    changedAt: instant().notNull(),
  },
  (table) => [
    uniqueIndex("cases_transaction").on(table.transactionId),
    // Ranking at start, deadlines, lapses.
    index("cases_state_due").on(table.state, table.dueAt),
    index("cases_assigned").on(table.assignedTo, table.state),
    index("cases_claimed").on(table.claimedBy, table.state),
    index("cases_claim_expiry").on(table.state, table.claimExpiresAt),
    index("cases_lapse").on(table.state, table.lapsesAt),
    // Other servers follow changes by time.
    index("cases_changed").on(table.changedAt),
    // Workload of a week: opened in it, still undecided at its end.
    index("cases_opened").on(table.openedAt),
    index("cases_decided_at").on(table.decidedAt),
    check("cases_claim", sql`(${table.state} = 'claimed') = (${table.claimedBy} is not null)`),
    check("cases_decided", sql`(${table.state} = 'decided') = (${table.decidedAt} is not null)`),
    check("cases_sample", sql`(${table.kind} = 'sample') = (${table.sampleProbability} is not null)`),
    check("cases_sample_range", sql`${table.sampleProbability} > 0 and ${table.sampleProbability} <= 1`),
  ],
);

export const caseNotes = mysqlTable(
  "case_notes",
  {
    id: uuid().primaryKey(),
    caseId: uuid()
      .notNull()
      .references(() => cases.id),
    personId: uuid()
      .notNull()
      .references(() => people.id),
    body: text().notNull(),
    writtenAt: instant().notNull(),
  },
  (table) => [index("case_notes_case").on(table.caseId, table.writtenAt)],
);

/** What somebody was writing when a claim lapsed or a page closed. */
export const noteDrafts = mysqlTable(
  "note_drafts",
  {
    caseId: uuid()
      .notNull()
      .references(() => cases.id),
    personId: uuid()
      .notNull()
      .references(() => people.id),
    body: text().notNull(),
    savedAt: instant().notNull(),
  },
  (table) => [primaryKey({ columns: [table.caseId, table.personId] })],
);

/**
 * How far each person is from the next case of the guaranteed shares. One row a person, so that two people who
 * ask at once never wait on one another.
 */
export const handOuts = mysqlTable("hand_outs", {
  personId: uuid()
    .primaryKey()
    .references(() => people.id),
  sinceOverdue: int().notNull().default(0),
  sinceSample: int().notNull().default(0),
});

export const decisions = mysqlTable(
  "decisions",
  {
    id: uuid().primaryKey(),
    caseId: uuid()
      .notNull()
      .references(() => cases.id),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    kind: mysqlEnum(DECISION_KINDS).notNull(),
    personId: uuid()
      .notNull()
      .references(() => people.id),
    apiKeyId: uuid().references(() => apiKeys.id),
    verdict: mysqlEnum(VERDICTS).notNull(),
    typology: mysqlEnum(TYPOLOGIES),
    confidence: mysqlEnum(CONFIDENCES).notNull(),
    reason: text(),
    decidedAt: instant().notNull(),
    undoUntil: instant().notNull(),
    undoneAt: instant(),
    supersededAt: instant(),
    /** The case itself while this decision stands, else null: at most one stands per case. */
    standsForCaseId: uuid().generatedAlwaysAs(
      sql`(if(undone_at is null and superseded_at is null, case_id, null))`,
      { mode: "stored" },
    ),
    scoreId: bigint({ mode: "number" })
      .notNull()
      .references(() => scores.id),
    /** What was shown, as doubles: contribution of every coordinate, offset, pull, logit. */
    evidence: bytes({ length: 4096 }).notNull(),
    scoreWasHidden: tinyint().notNull().default(0),
    scorerVersionBefore: bigint({ mode: "number" }).notNull(),
    scorerVersionAfter: bigint({ mode: "number" }).notNull(),
    policyVersion: int().notNull(),
    zone: mysqlEnum(ZONES).notNull(),
    /** Cases decided in one act share it. */
    actId: uuid().notNull(),
    handlingSeconds: int().notNull(),
  },
  (table) => [
    uniqueIndex("decisions_standing").on(table.standsForCaseId),
    index("decisions_case").on(table.caseId, table.decidedAt),
    index("decisions_person").on(table.personId, table.decidedAt),
    index("decisions_decided").on(table.decidedAt),
    check("decisions_typology", sql`(${table.verdict} = 'fraudulent') = (${table.typology} is not null)`),
    check("decisions_handling", sql`${table.handlingSeconds} >= 0`),
  ],
);

/** Money lines of a label: signed, so that an undo or a correction books the reverse and sums stay true. */
export const ledger = mysqlTable(
  "ledger",
  {
    id: bigint({ mode: "number" }).primaryKey().autoincrement(),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    decisionId: uuid().references(() => decisions.id),
    outcomeId: uuid(),
    reversesId: bigint({ mode: "number" }),
    bookedAt: instant().notNull(),
    occurredAt: instant().notNull(),
    attemptedMinor: bigint({ mode: "number" }).notNull(),
    preventedMinor: bigint({ mode: "number" }).notNull(),
    missedMinor: bigint({ mode: "number" }).notNull(),
    recoveredMinor: bigint({ mode: "number" }).notNull(),
    falsePositiveMinor: bigint({ mode: "number" }).notNull(),
    lostMarginMinor: bigint({ mode: "number" }).notNull(),
    reviewCostMinor: bigint({ mode: "number" }).notNull(),
    typology: mysqlEnum(TYPOLOGIES),
    detail: json<Record<string, unknown>>()(),
  },
  (table) => [
    index("ledger_booked").on(table.bookedAt),
    index("ledger_occurred").on(table.occurredAt),
    index("ledger_transaction").on(table.transactionId),
    uniqueIndex("ledger_reverses").on(table.reversesId),
  ],
);

export const jobRuns = mysqlTable(
  "job_runs",
  {
    job: varchar({ length: 64 }).notNull(),
    slot: varchar({ length: 64 }).notNull(),
    startedAt: instant().notNull(),
    finishedAt: instant(),
    problem: varchar({ length: 400 }),
  },
  (table) => [primaryKey({ columns: [table.job, table.slot] })],
);
