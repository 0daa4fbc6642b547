import { eq, sql } from "drizzle-orm";
import { expect, test } from "vitest";
import type { Database } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { createCandidate } from "@/lib/learning/create-candidate";
import { lockScorerInUse } from "@/lib/learning/held-scorer";
import { CandidateInput } from "@/lib/learning/learning-schema";
import { testWorld } from "../support/world";

/** Until somebody's statement waits for the scorer's row. */
async function untilSomebodyWaits(db: Database): Promise<void> {
  const isWaiting = sql`db = database() and id <> connection_id() and info like '%scorers%for update%'`;
  for (let waiting = 0; waiting === 0; ) {
    const [row] = await db
      .select({ waiting: sql`count(*)`.mapWith(Number) })
      .from(sql`information_schema.processlist`)
      .where(isWaiting);
    waiting = row?.waiting ?? 0;
  }
}

test("whoever waits for the scorer while another comes into use gets that one, younger or older", async () => {
  const world = await testWorld();
  const { db } = world;
  const supervisor = await world.person("supervisor");
  const add = (name: string) =>
    createCandidate(world.ctx(supervisor), CandidateInput.parse({ name, method: "newton" }));
  const older = await add("Older");
  const younger = await add("Younger");
  for (const { id } of [younger, older]) {
    let waiter: Promise<string> | undefined;
    await inTransaction(db, async (tx) => {
      const held = await lockScorerInUse(tx);
      waiter = inTransaction(db, async (other) => (await lockScorerInUse(other)).id);
      waiter.catch(() => undefined);
      await untilSomebodyWaits(db);
      await tx.update(scorers).set({ role: "retired" }).where(eq(scorers.id, held.id));
      await tx
        .update(scorers)
        .set({ role: "in_use", version: held.version + 1 })
        .where(eq(scorers.id, id));
    });
    expect(await waiter).toBe(id);
  }
});
