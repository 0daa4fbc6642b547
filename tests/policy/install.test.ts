import { expect, test } from "vitest";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import type { Context } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { ensureFirstPolicy } from "@/lib/policy/install";
import { policyInForce } from "@/lib/policy/read";
import { PolicyTerms } from "@/lib/policy/schema";
import { testDatabase } from "../support/database";

const { db } = await testDatabase();
const now = new Date("2026-11-12T08:00:00Z");
const ctx: Context = {
  actor: { kind: "system", job: "start" },
  db,
  now: () => now,
  requestId: newId(),
  idempotency: null,
};

test("servers that start together install one policy with one trail entry, and a later start leaves it alone", async () => {
  await Promise.all(Array.from({ length: 8 }, () => ensureFirstPolicy(ctx)));
  await ensureFirstPolicy({ ...ctx, now: () => new Date("2026-12-01T00:00:00Z") });
  expect(await db.select().from(policies)).toMatchObject([
    { version: 1, state: "approved", settledBy: null },
  ]);
  expect(await db.select({ act: trail.act }).from(trail)).toEqual([{ act: "policy.installed" }]);
  expect(await policyInForce(db, now)).toEqual({ version: 1, terms: DEFAULT_TERMS, effectiveAt: now });
});

test("the default terms pass the check that every proposal has to pass", () => {
  expect(PolicyTerms.parse(DEFAULT_TERMS)).toEqual(DEFAULT_TERMS);
});
