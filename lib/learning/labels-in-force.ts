import "server-only";
import { and, asc, gt, gte, isNotNull, isNull, lte } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import type { Label } from "../scorer";
import { fitVectors } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";

const PAGE_ROWS = 250;

/** The label that holds now at each place of a span of the log where it is another than the one that came; 0: none. */
export async function replacedLabels(
  db: Executor,
  fromSeq: number,
  toSeq: number,
): Promise<Map<number, Label | 0>> {
  const rows = await db
    .select({ place: labelLog.place, label: labelLog.label })
    .from(labelLog)
    .where(and(isNotNull(labelLog.place), gte(labelLog.place, fromSeq), lte(labelLog.place, toSeq)))
    .orderBy(asc(labelLog.seq));
  return new Map(rows.map((row) => [row.place as number, row.label as Label | 0]));
}

export type PlacedLabel = { seq: number; label: Label; vector: Float64Array };

/** Labels in force at the places up to `toSeq`, in order, with their vectors as the signals have them. */
export async function* labelsInForceUpTo(
  db: Executor,
  signals: SignalSet,
  toSeq: number,
): AsyncGenerator<PlacedLabel> {
  const replaced = await replacedLabels(db, 1, toSeq);
  for (let after = 0; ; ) {
    const rows = await db
      .select({
        seq: labelLog.seq,
        label: labelLog.label,
        transactionId: labelLog.transactionId,
        vector: labelLog.vector,
      })
      .from(labelLog)
      .where(and(isNull(labelLog.place), gt(labelLog.seq, after), lte(labelLog.seq, toSeq)))
      .orderBy(asc(labelLog.seq))
      .limit(PAGE_ROWS);
    const vectors = await fitVectors(db, signals, rows);
    for (const [index, { seq, label }] of rows.entries()) {
      const holds = replaced.get(seq) ?? (label as Label);
      if (holds !== 0) yield { seq, label: holds, vector: vectors[index] as Float64Array };
    }
    const last = rows.at(-1);
    if (!last || rows.length < PAGE_ROWS) return;
    after = last.seq;
  }
}
