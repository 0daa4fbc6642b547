import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { cases, ledger } from "@/db/schema/cases";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { weekFigures } from "@/lib/losses/read";
import { testWorld, type WaitingCase, WORLD_START } from "../support/world";

test("an undo returns a decision's money to the cent, and each stretch of work is paid once", async () => {
  const world = await testWorld();
  const reviewer = await world.person("reviewer");
  const [waiting] = (await world.waitingCases(1, { amountMinor: 50_00, held: true })) as [WaitingCase];
  const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
  const decide = (verdict: "fraudulent" | "legitimate", seenVersion: number, at: Date) =>
    decideCase(world.ctx(reviewer, at), {
      id: waiting.caseId,
      verdict,
      typology: verdict === "fraudulent" ? "other" : null,
      confidence: "sure",
      seenVersion,
      scoreWasHidden: false,
      together: [],
    });
  const week = async () =>
    (
      await weekFigures(world.db, {
        week: "2026-W10",
        by: "booking",
        timeZone: "UTC",
        now: new Date("2026-03-09T00:00:00Z"),
      })
    ).totals;

  const claim = {
    state: "claimed" as const,
    claimedBy: reviewer.personId,
    claimedAt: WORLD_START,
    claimExpiresAt: minutes(30),
  };
  await world.db.update(cases).set(claim).where(eq(cases.id, waiting.caseId));
  await decide("fraudulent", 1, minutes(5));
  // Five minutes at 36.00 an hour.
  expect(await week()).toMatchObject({
    attemptedMinor: 50_00n,
    preventedMinor: 50_00n,
    reviewCostMinor: 3_00n,
  });
  const undone = await undoDecision(world.ctx(reviewer, minutes(6)), { id: waiting.caseId });
  expect(await week()).toMatchObject({ attemptedMinor: 0n, preventedMinor: 0n, reviewCostMinor: 3_00n });
  await decide("legitimate", undone.revision, minutes(8));
  expect(await week()).toMatchObject({
    attemptedMinor: 0n,
    falsePositiveMinor: 50_00n,
    lostMarginMinor: 1_00n,
    reviewCostMinor: 4_20n,
    fraudulent: 0,
    legitimate: 1,
  });
  const lines = await world.db.select().from(ledger).where(eq(ledger.transactionId, waiting.transactionId));
  expect(lines).toHaveLength(3);
});
