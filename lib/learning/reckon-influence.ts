import "server-only";
import { and, asc, gt, lte } from "drizzle-orm";
import type { Database } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import { Breath } from "../breath";
import { wilsonInterval } from "../quality/wilson";
import type { Label } from "../scorer";
import { findingColumns, findRemovals } from "./find-removals";
import { type FindingRow, type GivenLabels, GivenLabelsByPerson } from "./finding";
import type { HeldScorer } from "./held-scorer";
import type { InfluenceResult } from "./influence-schema";
import { readPaymentsLookedAt } from "./payments-looked-at";
import { effectOfRemoving } from "./without-labels";

const PAGE_ROWS = 2_000;
/** Each is a fold of the log of its own; those with fewer labels are listed without an effect. */
const MOST_PEOPLE = 50;

type Reckoning = {
  held: HeldScorer;
  /** Told after each person, so that the work can be claimed on; false ends it early. */
  goesOn: () => Promise<boolean>;
};

/**
 * What each person's labels do to the scorer: for everybody with labels in force the log is folded again without them.
 * @returns null when it was ended early
 */
export async function reckonInfluence(
  db: Database,
  { held, goesOn }: Reckoning,
): Promise<InfluenceResult | null> {
  const payments = await readPaymentsLookedAt(db, held.signals);
  const given = await readGivenLabels(db, held.logSeq);
  const people: InfluenceResult["people"] = [];
  for (const [personId, labels] of given) {
    const reckoned = people.length < MOST_PEOPLE && labels.labels > 0;
    const span = { personId, from: null, to: null };
    const effect = reckoned
      ? await effectOfRemoving(db, held, await findRemovals(db, span, held.logSeq), payments)
      : null;
    people.push({ personId, ...labelsView(labels), effect });
    if (!(await goesOn())) return null;
  }
  return { payments: { of: payments.of, count: payments.count }, people };
}

/** Those with most labels in force first. */
async function readGivenLabels(db: Database, upToSeq: number): Promise<[string, GivenLabels][]> {
  const places = new Map<number, FindingRow[]>();
  for (let after = 0; ; ) {
    const rows = await db
      .select({ ...findingColumns, place: labelLog.place })
      .from(labelLog)
      .where(and(gt(labelLog.seq, after), lte(labelLog.seq, upToSeq)))
      .orderBy(asc(labelLog.seq))
      .limit(PAGE_ROWS);
    for (const { place, ...row } of rows) {
      const finding = { ...row, label: row.label as Label | 0 };
      const known = places.get(place ?? row.seq);
      if (known) known.push(finding);
      else places.set(row.seq, [finding]);
    }
    const last = rows.at(-1);
    if (!last || rows.length < PAGE_ROWS) break;
    after = last.seq;
  }
  const byPerson = new GivenLabelsByPerson();
  const breath = new Breath();
  for (const rows of places.values()) {
    byPerson.addPlace(rows);
    await breath.take();
  }
  return byPerson.entries().sort(([, a], [, b]) => b.labels - a.labels);
}

function labelsView({ labels, fraudulent, firstAt, lastAt, given, corrected, overturned }: GivenLabels) {
  return {
    labels,
    fraudulent,
    firstAt: firstAt?.toISOString() ?? null,
    lastAt: lastAt?.toISOString() ?? null,
    corrected: share(corrected, given),
    overturned: share(overturned, given),
  };
}

const share = (count: number, n: number) =>
  n === 0 ? null : { value: count / n, count, n, ...wilsonInterval(count, n) };
