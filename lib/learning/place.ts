import "server-only";
import { asc, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import type { LabelKind } from "../decisions/codes";
import type { Label } from "../scorer";

export type LabelInForce = { place: number; label: Label; kind: LabelKind; decisionId: string | null };

/** The label that holds for each of the transactions and its place in the log; transactions without one are left out. */
export async function labelsInForce(
  db: Executor,
  transactionIds: readonly string[],
): Promise<Map<string, LabelInForce>> {
  const held = new Map<string, LabelInForce>();
  if (transactionIds.length === 0) return held;
  const rows = await db
    .select({
      seq: labelLog.seq,
      place: labelLog.place,
      label: labelLog.label,
      kind: labelLog.kind,
      decisionId: labelLog.decisionId,
      transactionId: labelLog.transactionId,
    })
    .from(labelLog)
    .where(inArray(labelLog.transactionId, [...transactionIds]))
    .orderBy(asc(labelLog.seq));
  for (const row of rows) {
    const { transactionId, kind, decisionId } = row;
    const place = row.place ?? row.seq;
    if (row.label !== 0) held.set(transactionId, { place, label: row.label as Label, kind, decisionId });
    else if (held.get(transactionId)?.place === place) held.delete(transactionId);
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
