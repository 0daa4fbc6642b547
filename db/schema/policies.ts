import {
  bigint,
  double,
  index,
  int,
  mysqlEnum,
  mysqlTable,
  primaryKey,
  text,
  uniqueIndex,
} from "drizzle-orm/mysql-core";
import { POLICY_STATES } from "../../lib/policy/codes";
import { type PolicyTerms, readStoredTerms } from "../../lib/policy/schema";
import { instant, json, uuid } from "../columns";
import { people } from "./people";

export const policies = mysqlTable(
  "policies",
  {
    id: uuid().primaryKey(),
    /** Given at approval; null while proposed, declined or withdrawn. */
    version: int(),
    state: mysqlEnum(POLICY_STATES).notNull(),
    terms: json<PolicyTerms>(readStoredTerms)().notNull(),
    basedOnVersion: int(),
    reason: text().notNull(),
    proposedBy: uuid().references(() => people.id),
    proposedAt: instant().notNull(),
    settledBy: uuid().references(() => people.id),
    settledAt: instant(),
    /** Why somebody declined it. */
    refusalReason: text(),
    /** Moment from which intake and ranking use it. */
    effectiveAt: instant(),
    revision: int().notNull().default(1),
  },
  (table) => [
    uniqueIndex("policies_version").on(table.version),
    index("policies_state").on(table.state, table.effectiveAt),
  ],
);

/** Where a capacity threshold lay, from when on: the cut that yields the wished number of cases a day. */
export const policyCuts = mysqlTable(
  "policy_cuts",
  {
    policyVersion: int().notNull(),
    computedAt: instant().notNull(),
    logit: double().notNull(),
    /** Scores it was taken from. */
    scoreCount: int().notNull(),
    lastScoreId: bigint({ mode: "number" }).notNull(),
  },
  (table) => [primaryKey({ columns: [table.policyVersion, table.computedAt] })],
);
