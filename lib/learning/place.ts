import "server-only";
import { and, asc, eq, inArray, or } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import type { LabelKind } from "../decisions/codes";
import type { Label } from "../scorer";
import { findingColumns } from "./find-removals";
import { type FindingRow, findingThatHolds } from "./finding";

export type LabelInForce = { place: number; label: Label; kind: LabelKind; decisionId: string | null };

/** The label that holds for each of the transactions and its place in the log; transactions without one are left out. */
export async function labelsInForce(
  db: Executor,
  transactionIds: readonly string[],
): Promise<Map<string, LabelInForce>> {
  const held = new Map<string, LabelInForce>();
  if (transactionIds.length === 0) return held;
  const rows = await db
    .select({ ...findingColumns, place: labelLog.place })
    .from(labelLog)
    .where(inArray(labelLog.transactionId, [...transactionIds]))
    .orderBy(asc(labelLog.seq));
  const said = new Map<number, FindingRow[]>();
  for (const { place: earlier, ...row } of rows) {
    const finding = { ...row, label: row.label as Label | 0 };
    const { transactionId, label } = finding;
    const place = earlier ?? row.seq;
    const there = [...(said.get(place) ?? []), finding];
    said.set(place, there);
    if (label === 0) {
      if (held.get(transactionId)?.place === place) held.delete(transactionId);
      continue;
    }
    // An undo or a removal may give the place back to what had been found there before.
    const { kind, decisionId } = findingThatHolds(there) ?? finding;
    held.set(transactionId, { place, label, kind, decisionId });
  }
  return held;
}

/** Those of the transactions whose label was last taken away by a settled finding, such as a customer's own misuse. */
export async function settledWithoutLabel(
  db: Executor,
  transactionIds: readonly string[],
  settled: readonly LabelKind[],
): Promise<Set<string>> {
  if (transactionIds.length === 0) return new Set();
  const rows = await db
    .select({ transactionId: labelLog.transactionId, label: labelLog.label, kind: labelLog.kind })
    .from(labelLog)
    .where(inArray(labelLog.transactionId, [...transactionIds]))
    .orderBy(asc(labelLog.seq));
  const last = new Map(rows.map((row) => [row.transactionId, row]));
  return new Set(
    [...last.values()].flatMap(({ transactionId, label, kind }) =>
      label === 0 && settled.includes(kind) ? transactionId : [],
    ),
  );
}

/** All that was said at one place of the log, oldest first. */
export async function rowsAtPlace(db: Executor, place: number): Promise<FindingRow[]> {
  const rows = await db
    .select({ ...findingColumns, place: labelLog.place })
    .from(labelLog)
    .where(or(eq(labelLog.seq, place), eq(labelLog.place, place)))
    .orderBy(asc(labelLog.seq));
  return rows.map(({ place: _, ...row }) => ({ ...row, label: row.label as Label | 0 }));
}

/** Where in the log a decision stands, or stood; null where its verdict was no label and overruled none. */
export async function placeOfDecision(
  db: Executor,
  transactionId: string,
  decisionId: string,
): Promise<number | null> {
  const [row] = await db
    .select({ seq: labelLog.seq, place: labelLog.place })
    .from(labelLog)
    .where(and(eq(labelLog.transactionId, transactionId), eq(labelLog.decisionId, decisionId)))
    .limit(1);
  return row ? (row.place ?? row.seq) : null;
}
