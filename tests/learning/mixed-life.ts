import { asc, eq } from "drizzle-orm";
import { expect } from "vitest";
import { Chance } from "@/db/demo/random";
import { labelLog } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { labelFromOutcomes } from "@/lib/learning/label-outcomes";
import { newId } from "@/lib/new-id";
import { type WaitingCase, WORLD_START, type World } from "../support/world";

/** Hundreds of acts, each a transaction of its own, on a machine that has other things to do. */
export const LONG_LIFE_MS = 240_000;

/** A team that decides, takes back, corrects and is overturned, always in the same way, on a clock of its own. */
export async function mixedLife(world: World, seed: number) {
  const reviewer = await world.person("reviewer");
  const supervisor = await world.person("supervisor");
  const chance = new Chance(seed);
  const decided: WaitingCase[] = [];
  let clockMs = WORLD_START.getTime();
  const later = () => {
    clockMs += 1_000;
    return new Date(clockMs);
  };

  const decide = (waiting: WaitingCase, fraudulent: boolean, by = reviewer) =>
    decideCase(world.ctx(by, later()), {
      id: waiting.caseId,
      verdict: fraudulent ? "fraudulent" : "legitimate",
      typology: fraudulent ? "other" : null,
      confidence: "sure",
      seenVersion: 1,
      scoreWasHidden: false,
      together: [],
    });

  async function correct(waiting: WaitingCase): Promise<void> {
    const [standing] = await world.db
      .select({ label: labelLog.label })
      .from(labelLog)
      .where(eq(labelLog.transactionId, waiting.transactionId))
      .orderBy(asc(labelLog.seq));
    const fraudulent = standing?.label !== 1;
    await correctDecision(world.ctx(supervisor, later()), {
      id: waiting.caseId,
      verdict: fraudulent ? "fraudulent" : "legitimate",
      typology: fraudulent ? "other" : null,
      reason: "Found otherwise",
    }).catch((error: { code?: string }) => {
      // Corrected before, by the same supervisor: nobody corrects their own finding.
      expect(error.code).toBe("rule_broken");
    });
  }

  const overturn = (waiting: WaitingCase) =>
    inTransaction(world.db, (tx) =>
      labelFromOutcomes(tx, later(), [
        { transactionId: waiting.transactionId, outcomeId: newId(), label: 1 },
      ]),
    );

  /** A history in one act: so many payments that outcomes have labelled. */
  async function begin(count: number): Promise<void> {
    const cases = await world.waitingCases(count, { seed: 5_000 + seed });
    const items = cases.map(({ transactionId }) => ({
      transactionId,
      outcomeId: newId(),
      label: chance.hits(0.3) ? (1 as const) : (-1 as const),
    }));
    await inTransaction(world.db, (tx) => labelFromOutcomes(tx, later(), items));
  }

  /** Decides so many cases, with everything that happens to decisions in between. */
  async function live(count: number): Promise<void> {
    const cases = await world.waitingCases(count, { seed: seed + decided.length });
    for (const waiting of cases) {
      await decide(waiting, chance.hits(0.3));
      if (chance.hits(0.06)) {
        await undoDecision(world.ctx(reviewer, later()), { id: waiting.caseId });
        continue;
      }
      decided.push(waiting);
      if (chance.hits(0.05)) await correct(chance.pick(decided));
      if (chance.hits(0.03)) await overturn(chance.pick(decided));
    }
  }

  return { reviewer, supervisor, later, decide, begin, live };
}
