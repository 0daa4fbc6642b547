import "server-only";
import { and, asc, eq, gt, gte, inArray, lt, lte, or } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import type { Label } from "../scorer";
import { type FindingRow, findingThatHolds, labelAt } from "./finding";

/** Findings of one person that were made at or after `from` and before `to`. */
export type RemovalSpan = { personId: string; from: Date | null; to: Date | null };

/** What shall hold at a place once the person's findings are out of the log. */
export type Removal = {
  place: number;
  label: Label | 0;
  transactionId: string;
  /** Another's earlier finding that holds again; null where nothing does. */
  holdsAgain: FindingRow | null;
};

const FINDINGS = ["decision", "second_review", "adjudication", "correction"] as const;

/** So many rows are turned into objects in one go. */
const PAGE_ROWS = 1_000;

/**
 * Where the log would say something else if the person had never found anything at the places of the span: nothing, or
 * what another had found there before. What others have found since stays as it is.
 * @param upToSeq last row of the log to look at
 * @returns in the order of the places
 */
export async function findRemovals(db: Executor, span: RemovalSpan, upToSeq: number): Promise<Removal[]> {
  const removals: Removal[] = [];
  const seen = new Set<number>();
  for (let after = 0; ; ) {
    const theirs = await theirRows(db, span, after, upToSeq);
    const places = new Set(theirs.map(({ seq, place }) => place ?? seq).filter((place) => !seen.has(place)));
    for (const [place, rows] of await rowsAt(db, [...places], upToSeq)) {
      seen.add(place);
      const holdsAgain = findingThatHolds(rows, span.personId);
      const label = holdsAgain?.label ?? 0;
      const transactionId = rows[0]?.transactionId;
      if (transactionId === undefined || label === labelAt(rows)) continue;
      removals.push({ place, label, transactionId, holdsAgain });
    }
    const last = theirs.at(-1);
    if (!last || theirs.length < PAGE_ROWS) break;
    after = last.seq;
  }
  return removals.sort((a, b) => a.place - b.place);
}

function theirRows(db: Executor, { personId, from, to }: RemovalSpan, afterSeq: number, upToSeq: number) {
  return db
    .select({ seq: labelLog.seq, place: labelLog.place })
    .from(labelLog)
    .where(
      and(
        eq(labelLog.personId, personId),
        inArray(labelLog.kind, [...FINDINGS]),
        gt(labelLog.seq, afterSeq),
        lte(labelLog.seq, upToSeq),
        from ? gte(labelLog.at, from) : undefined,
        to ? lt(labelLog.at, to) : undefined,
      ),
    )
    .orderBy(asc(labelLog.seq))
    .limit(PAGE_ROWS);
}

/** All that was said at the places, each oldest first. */
async function rowsAt(
  db: Executor,
  places: readonly number[],
  upToSeq: number,
): Promise<Map<number, FindingRow[]>> {
  const byPlace = new Map<number, FindingRow[]>();
  if (places.length === 0) return byPlace;
  const rows = await db
    .select({ ...findingColumns, place: labelLog.place })
    .from(labelLog)
    .where(
      and(
        or(inArray(labelLog.seq, [...places]), inArray(labelLog.place, [...places])),
        lte(labelLog.seq, upToSeq),
      ),
    )
    .orderBy(asc(labelLog.seq));
  for (const { place, ...row } of rows) {
    const finding = { ...row, label: row.label as Label | 0 };
    const known = byPlace.get(place ?? row.seq);
    if (known) known.push(finding);
    else byPlace.set(place ?? row.seq, [finding]);
  }
  return byPlace;
}

export const findingColumns = {
  seq: labelLog.seq,
  kind: labelLog.kind,
  label: labelLog.label,
  transactionId: labelLog.transactionId,
  caseId: labelLog.caseId,
  decisionId: labelLog.decisionId,
  outcomeId: labelLog.outcomeId,
  personId: labelLog.personId,
  at: labelLog.at,
};
