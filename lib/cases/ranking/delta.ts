import "server-only";
import type { Database } from "@/db/client";
import { type CaseState, UNDECIDED_STATES } from "../codes";
import { type ChangedCase, readFacts, readPlaced } from "./read-waiting";
import type { CaseFacts, WaitingCases } from "./waiting-cases";

/** How a case differs from what the ranking knows; `after` is null once it waits no longer. */
export type CaseDelta = {
  caseId: string;
  state: CaseState;
  before: CaseFacts | null;
  /** With its vector only where that is new. */
  after: { facts: CaseFacts; vector: Float64Array | null } | null;
};

const PAGE = 500;
/** New vectors taken in at once of cases that nobody named: whoever decides meanwhile waits no longer than for those. */
const MOST_FOUND_FRESH = 64;

export type Delta = {
  changes: CaseDelta[];
  /** Ids of cases with a new vector that are left for the next time. */
  left: string[];
};

/**
 * Compares cases that may have changed with what is known.
 * @param named rows of cases that somebody waits for; @param found others
 */
export async function readDelta(
  db: Database,
  known: WaitingCases,
  named: readonly ChangedCase[],
  found: readonly ChangedCase[],
): Promise<Delta> {
  const isNamed = new Set(named.map(({ id }) => id));
  const rows = new Map([...found, ...named].map((row) => [row.id, row]));
  const gone: CaseDelta[] = [];
  const fresh: string[] = [];
  const foundFresh: string[] = [];
  const touched: string[] = [];
  for (const row of rows.values()) {
    const before = known.find(row.id) ?? null;
    if (!waits(row.state)) {
      if (before) gone.push({ caseId: row.id, state: row.state, before, after: null });
    } else if (before?.scoreId !== row.scoreId) (isNamed.has(row.id) ? fresh : foundFresh).push(row.id);
    else if (!isSame(before, row)) touched.push(row.id);
  }
  const taken = [...fresh, ...foundFresh.slice(0, MOST_FOUND_FRESH)];
  return {
    changes: [
      ...gone,
      ...(await withVectors(db, known, taken)),
      ...(await withoutVectors(db, known, touched)),
    ],
    left: foundFresh.slice(MOST_FOUND_FRESH),
  };
}

const waits = (state: CaseState) => UNDECIDED_STATES.some((undecided) => undecided === state);

const isSame = (before: CaseFacts, row: ChangedCase) =>
  before.revision === row.revision && before.changedAt.getTime() === row.changedAt.getTime();

async function withVectors(db: Database, known: WaitingCases, ids: readonly string[]): Promise<CaseDelta[]> {
  const deltas: CaseDelta[] = [];
  for (let from = 0; from < ids.length; from += PAGE) {
    for (const after of await readPlaced(db, ids.slice(from, from + PAGE)))
      deltas.push(deltaOf(known, after));
  }
  return deltas;
}

async function withoutVectors(
  db: Database,
  known: WaitingCases,
  ids: readonly string[],
): Promise<CaseDelta[]> {
  const deltas: CaseDelta[] = [];
  for (let from = 0; from < ids.length; from += PAGE) {
    for (const facts of await readFacts(db, ids.slice(from, from + PAGE))) {
      // Decided or given a new score since it was looked at: the next look finds it.
      if (!waits(facts.state) || facts.scoreId !== known.find(facts.id)?.scoreId) continue;
      deltas.push(deltaOf(known, { facts, vector: null }));
    }
  }
  return deltas;
}

function deltaOf(known: WaitingCases, after: { facts: CaseFacts; vector: Float64Array | null }): CaseDelta {
  const { id, state } = after.facts;
  return { caseId: id, state, before: known.find(id) ?? null, after };
}
