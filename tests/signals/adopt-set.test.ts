import { expect, test } from "vitest";
import { signalSets } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { correctDecision } from "@/lib/decisions/correct";
import { adoptSet, foldForSet } from "@/lib/learning/adopt-set";
import { foldLog } from "@/lib/learning/fold";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { replayLog } from "@/lib/learning/replay";
import { newId } from "@/lib/new-id";
import { createScorer } from "@/lib/scorer";
import { catalogueDefinition, signalSetOf } from "@/lib/signals/signal-set";
import { testWorld, type WaitingCase } from "../support/world";
import { LOYALTY, Office } from "./own-signal";

test("a fold made ahead is caught up with, whatever has come since or has been replaced before it", async () => {
  const office = await Office.open(await testWorld());
  const { world } = office;
  const waiting = await office.cases(240, 31);
  // A place early in the log and one behind the snapshot after two hundred labels.
  await office.decide(waiting[0] as WaitingCase, true);
  await office.label(waiting.slice(1, 205));
  await office.decide(waiting[205] as WaitingCase, true);
  await office.label(waiting.slice(206, 220));

  const definition = catalogueDefinition([
    { ...LOYALTY, id: newId(), key: "own_loyal", position: 0, isOn: true },
  ]);
  const correct = (index: number) =>
    correctDecision(office.as(office.supervisor), {
      id: (waiting[index] as WaitingCase).caseId,
      verdict: "legitimate",
      typology: null,
      reason: "The customer confirmed it",
    });
  const meanwhile = [
    async () => undefined,
    () => office.decide(waiting[220] as WaitingCase, false),
    async () => {
      await office.decide(waiting[221] as WaitingCase, true);
      await correct(205);
    },
    () => correct(0),
    // One that is replaced had itself come since.
    async () => {
      await office.decide(waiting[222] as WaitingCase, true);
      await correct(222);
    },
  ];
  for (const [index, happens] of meanwhile.entries()) {
    const set = signalSetOf(index + 2, definition);
    const ahead = await foldForSet(world.db, set);
    await happens();
    const now = office.as(office.supervisor).now();
    await inTransaction(world.db, async (tx) => {
      await tx.insert(signalSets).values({ version: set.version, definition, createdAt: now });
      await adoptSet(tx, now, set, ahead);
    });
    const held = await readScorerInUse(world.db);
    expect(held.signals.version).toBe(set.version);
    const untrained = createScorer(held.scorer.options);
    const fresh = await foldLog(world.db, { scorer: untrained, place: 0, signals: set }, held.logSeq);
    expect(
      Buffer.from(held.scorer.snapshot()).equals(Buffer.from(fresh.scorer.snapshot())),
      `round ${index}`,
    ).toBe(true);
  }
  expect(await replayLog(world.db)).toMatchObject({ firstDifferingLoss: null, differingStates: [] });
}, 180_000);
