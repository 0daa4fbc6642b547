import "server-only";
import { and, asc, gt, lte } from "drizzle-orm";
import type { Database } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import { Breath } from "../breath";
import { wilsonInterval } from "../quality/wilson";
import type { Label, Scorer } from "../scorer";
import { findingColumns, findRemovals } from "./find-removals";
import { type FindingRow, type GivenLabels, GivenLabelsByPerson } from "./finding";
import { foldApart, type Overrides } from "./fold-apart";
import type { HeldScorer } from "./held-scorer";
import type { InfluenceResult, ScorerEffect } from "./influence-schema";
import { readPaymentsLookedAt } from "./payments-looked-at";
import { effectOf, overridesOf } from "./without-labels";

const PAGE_ROWS = 2_000;
/** Those with fewer labels are listed without an effect. */
const MOST_PEOPLE = 50;
/** Folded side by side, in one reading of the log. */
const TOGETHER = 25;

type Reckoning = {
  held: HeldScorer;
  /** Asked now and then, so that the work can be claimed on; false ends it early. */
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
  const reckoned = given.filter(([, { labels }]) => labels > 0).slice(0, MOST_PEOPLE);
  const effects = new Map<string, ScorerEffect>();
  // The leader keeps every vector it has seen, so no two of it at once.
  const together = held.scorer.method === "leader" ? 1 : TOGETHER;
  for (let from = 0; from < reckoned.length; from += together) {
    const ids = reckoned.slice(from, from + together).map(([personId]) => personId);
    const apart = await foldWithoutEach(db, held, ids, goesOn);
    if (!apart) return null;
    for (const [personId, scorer] of apart) effects.set(personId, await effectOf(held, scorer, payments));
    if (!(await goesOn())) return null;
  }
  return {
    payments: { of: payments.of, count: payments.count },
    people: given.map(([personId, labels]) => ({
      personId,
      ...labelsView(labels),
      effect: effects.get(personId) ?? null,
    })),
  };
}

/** The scorer as the log makes it without each of the people in turn; those whose labels change nothing are left out. */
async function foldWithoutEach(
  db: Database,
  held: HeldScorer,
  personIds: readonly string[],
  goesOn: () => Promise<boolean>,
): Promise<[string, Scorer][] | null> {
  const changing: [string, Overrides][] = [];
  for (const personId of personIds) {
    const removals = await findRemovals(db, { personId, from: null, to: null }, held.logSeq);
    if (removals.length > 0) changing.push([personId, overridesOf(removals)]);
  }
  if (changing.length === 0) return [];
  const scorers = await foldApart(
    db,
    held,
    changing.map(([, overrides]) => overrides),
    goesOn,
  );
  return scorers && changing.map(([personId], index) => [personId, scorers[index] as Scorer]);
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
