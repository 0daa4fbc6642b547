import "server-only";
import { and, asc, eq, gte, inArray, isNotNull, lt, lte, type SQL, sql } from "drizzle-orm";
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

/**
 * Where the log would say something else if the person had never found anything at the places of the span: nothing, or
 * what another had found there before. What others have found since stays as it is.
 * @param upToSeq last row of the log to look at
 * @returns in the order of the places
 */
export async function findRemovals(db: Executor, span: RemovalSpan, upToSeq: number): Promise<Removal[]> {
  const removals: Removal[] = [];
  for (const [place, rows] of await rowsOfTheirPlaces(db, span, upToSeq)) {
    const holdsAgain = findingThatHolds(rows, span.personId);
    const label = holdsAgain?.label ?? 0;
    const transactionId = rows[0]?.transactionId;
    if (transactionId === undefined || label === labelAt(rows)) continue;
    removals.push({ place, label, transactionId, holdsAgain });
  }
  return removals.sort((a, b) => a.place - b.place);
}

async function rowsOfTheirPlaces(
  db: Executor,
  { personId, from, to }: RemovalSpan,
  upToSeq: number,
): Promise<Map<number, FindingRow[]>> {
  const theirs = db
    .selectDistinct({ place: placeOf.as("their_place") })
    .from(labelLog)
    .where(
      and(
        eq(labelLog.personId, personId),
        inArray(labelLog.kind, [...FINDINGS]),
        lte(labelLog.seq, upToSeq),
        from ? gte(labelLog.at, from) : undefined,
        to ? lt(labelLog.at, to) : undefined,
      ),
    )
    .as("theirs");
  const rows = async (joined: SQL, where: SQL | undefined) =>
    db
      .select({ ...findingColumns, place: theirs.place })
      .from(theirs)
      .innerJoin(labelLog, joined)
      .where(where)
      .orderBy(asc(labelLog.seq));
  const roots = await rows(eq(labelLog.seq, theirs.place), undefined);
  const later = await rows(
    eq(labelLog.place, theirs.place),
    and(isNotNull(labelLog.place), lte(labelLog.seq, upToSeq)),
  );
  const byPlace = new Map<number, FindingRow[]>();
  for (const { place, ...row } of [...roots, ...later]) {
    const finding = { ...row, label: row.label as Label | 0 };
    const known = byPlace.get(place);
    if (known) known.push(finding);
    else byPlace.set(place, [finding]);
  }
  return byPlace;
}

/** A row without a place stands at its own. */
const placeOf = sql<number>`coalesce(${labelLog.place}, ${labelLog.seq})`.mapWith(Number);

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
