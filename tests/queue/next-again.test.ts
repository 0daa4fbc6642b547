import { randomBytes } from "node:crypto";
import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { idempotencyKeys } from "@/db/schema/people";
import { takeNextCase } from "@/lib/cases/next";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { testWorld } from "../support/world";

test("a request for the next case that a stopped server left half answered gets its case when it is sent again", async () => {
  const world = await testWorld();
  const reviewer = await world.person("reviewer");
  await world.waitingCases(2);
  const ctx = {
    ...world.ctx(reviewer),
    idempotency: { key: "one-request", requestHash: randomBytes(32) },
  };
  const first = await takeNextCase(ctx, { notThese: [] });
  // As the transaction wrote it, before the case was read for the answer.
  await world.db
    .update(idempotencyKeys)
    .set({ answer: first?.caseId, complete: 0 })
    .where(eq(idempotencyKeys.key, "one-request"));
  const again = await takeNextCase(ctx, { notThese: [] });
  stopRanking(world.db);
  expect(again).toMatchObject({ caseId: first?.caseId, mine: true });
});
