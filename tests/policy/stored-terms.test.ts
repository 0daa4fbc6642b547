import { asc, eq, sql } from "drizzle-orm";
import { afterAll, beforeAll, expect, test } from "vitest";
import { policies } from "@/db/schema/policies";
import { termChanges } from "@/lib/policy/changes";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { newestApproved, policyInForce } from "@/lib/policy/read";
import { listRecords } from "@/lib/policy/records";
import { PolicyTerms } from "@/lib/policy/schema";
import { testWorld, WORLD_START, type World } from "../support/world";

let world: World;
beforeAll(async () => {
  world = await testWorld();
});
afterAll(() => world.close());

test("terms of a record from before payments could mature read as ignoring them, and so as no change", async () => {
  const { db } = world;
  await db
    .update(policies)
    .set({ terms: sql`json_remove(${policies.terms}, '$.maturedUnlabelled')` })
    .where(eq(policies.version, 1));
  const [stored] = await db.select({ text: sql<string>`${policies.terms}` }).from(policies);
  expect(stored?.text).not.toContain("maturedUnlabelled");
  const [record] = await listRecords(db, eq(policies.version, 1), asc(policies.proposedAt));
  for (const terms of [
    (await policyInForce(db, WORLD_START)).terms,
    (await newestApproved(db)).terms,
    record?.terms,
  ]) {
    expect(terms).toEqual(DEFAULT_TERMS);
    expect(PolicyTerms.safeParse(terms).success).toBe(true);
    expect(termChanges(terms ?? {}, DEFAULT_TERMS)).toEqual([]);
  }
});
