import { randomBytes } from "node:crypto";
import { eq, sql } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { caseNotes, cases, decisions, ledger } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { labelLog } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import type { DecideInput } from "@/lib/decisions/schema";
import { KnownError } from "@/lib/errors";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { ReplayedAnswer } from "@/lib/write-once";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let reviewers: PersonActor[];

beforeAll(async () => {
  world = await testWorld();
  reviewers = await Promise.all(Array.from({ length: 20 }, () => world.person("reviewer")));
});

const verdict = (waiting: WaitingCase, more: Partial<DecideInput> = {}): DecideInput => ({
  id: waiting.caseId,
  verdict: "fraudulent",
  typology: "details_theft",
  confidence: "sure",
  seenVersion: 1,
  scoreWasHidden: false,
  together: [],
  ...more,
});

async function countOf(table: typeof decisions | typeof labelLog | typeof ledger, transactionId: string) {
  const [row] = await world.db
    .select({ count: sql<number>`count(*)` })
    .from(table)
    .where(eq(table.transactionId, transactionId));
  return Number(row?.count);
}

describe("a decision", () => {
  test("closes the case, labels the payment, teaches the scorer, books money and leaves a trail in one act", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [waiting] = (await world.waitingCases(1, { seed: 11 })) as [WaitingCase];
    const before = await readScorerInUse(world.db);
    const answer = await decideCase(world.ctx(reviewer), verdict(waiting, { note: "Card was at home" }));
    const after = await readScorerInUse(world.db);
    expect(after.version).toBe(before.version + 1);
    expect(answer.scorerVersion).toBe(after.version);
    expect(answer.probabilityBefore).toBe(before.scorer.score(waiting.vector).probability);
    expect(after.scorer.score(waiting.vector).probability).toBeGreaterThan(answer.probabilityBefore);
    expect(answer.loss).toBeCloseTo(-Math.log(answer.probabilityBefore), 12);
    expect(after.cumulativeLoss).toBe(before.cumulativeLoss + (answer.loss as number));
    const [row] = await world.db.select().from(cases).where(eq(cases.id, waiting.caseId));
    expect(row).toMatchObject({ state: "decided", revision: 2, claimedBy: null });
    const [payment] = await world.db
      .select()
      .from(transactions)
      .where(eq(transactions.id, waiting.transactionId));
    expect(payment?.label).toBe(1);
    expect(await countOf(ledger, waiting.transactionId)).toBe(1);
    const [entry] = await world.db.select().from(trail).where(eq(trail.subjectId, answer.decisionId));
    expect(entry).toMatchObject({ act: "case.decided", actorId: reviewer.personId, caseId: waiting.caseId });
    expect(entry?.facts).not.toContain("Card was at home");
    const [note] = await world.db.select().from(caseNotes).where(eq(caseNotes.caseId, waiting.caseId));
    expect(note?.body).toBe("Card was at home");
  });

  test("on a customer's own misuse closes the case and teaches nothing", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [waiting] = (await world.waitingCases(1, { seed: 12 })) as [WaitingCase];
    const before = await readScorerInUse(world.db);
    const answer = await decideCase(
      world.ctx(reviewer),
      verdict(waiting, { verdict: "customer_misuse", typology: null }),
    );
    expect(answer.loss).toBeNull();
    expect((await readScorerInUse(world.db)).version).toBe(before.version);
    expect(await countOf(labelLog, waiting.transactionId)).toBe(0);
  });

  test("is refused when the case row has changed since it was seen", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [waiting] = (await world.waitingCases(1, { seed: 13 })) as [WaitingCase];
    await expect(decideCase(world.ctx(reviewer), verdict(waiting, { seenVersion: 2 }))).rejects.toMatchObject(
      {
        code: "conflict",
      },
    );
    expect(await countOf(decisions, waiting.transactionId)).toBe(0);
  });

  test("by somebody without the role changes nothing", async () => {
    const auditor = await world.person("auditor");
    const [waiting] = (await world.waitingCases(1, { seed: 14 })) as [WaitingCase];
    await expect(decideCase(world.ctx(auditor), verdict(waiting))).rejects.toMatchObject({
      code: "forbidden",
    });
    expect(await countOf(decisions, waiting.transactionId)).toBe(0);
  });
});

describe("twenty people deciding one case at once", () => {
  test("make exactly one decision and nineteen clean conflicts", async () => {
    for (let round = 0; round < 5; round++) {
      const [waiting] = (await world.waitingCases(1, { seed: 100 + round })) as [WaitingCase];
      const results = await Promise.allSettled(
        reviewers.map((reviewer) => decideCase(world.ctx(reviewer), verdict(waiting))),
      );
      const refused = results.flatMap((result) => (result.status === "rejected" ? [result.reason] : []));
      expect(results.filter((result) => result.status === "fulfilled")).toHaveLength(1);
      expect(refused).toHaveLength(19);
      for (const error of refused) expect(error).toMatchObject({ name: "KnownError", code: "conflict" });
      expect(await countOf(decisions, waiting.transactionId)).toBe(1);
      expect(await countOf(labelLog, waiting.transactionId)).toBe(1);
      expect(await countOf(ledger, waiting.transactionId)).toBe(1);
    }
  });
});

describe("one request sent twenty times at once", () => {
  test("makes one decision and gives twenty equal answers", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [waiting] = (await world.waitingCases(1, { seed: 200 })) as [WaitingCase];
    const idempotency = { key: "same-key", requestHash: randomBytes(32) };
    const answers = await Promise.all(
      Array.from({ length: 20 }, async () => {
        try {
          return await decideCase({ ...world.ctx(reviewer), idempotency }, verdict(waiting));
        } catch (error) {
          if (error instanceof ReplayedAnswer) return error.answer;
          throw error;
        }
      }),
    );
    expect(new Set(answers.map((answer) => JSON.stringify(answer))).size).toBe(1);
    expect(await countOf(decisions, waiting.transactionId)).toBe(1);
  });

  test("with another body under the same key is refused", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [waiting] = (await world.waitingCases(1, { seed: 201 })) as [WaitingCase];
    const ctx = world.ctx(reviewer);
    await decideCase({ ...ctx, idempotency: { key: "one", requestHash: randomBytes(32) } }, verdict(waiting));
    await expect(
      decideCase({ ...ctx, idempotency: { key: "one", requestHash: randomBytes(32) } }, verdict(waiting)),
    ).rejects.toMatchObject({ code: "invalid" });
  });
});

describe("cases of one account decided in one act", () => {
  test("each get their own verdict, and one that is refused leaves all untouched", async () => {
    const [reviewer, other] = reviewers as [PersonActor, PersonActor];
    const [main, second, third] = (await world.waitingCases(3, { seed: 300, accountId: "ACC-SHARED" })) as [
      WaitingCase,
      WaitingCase,
      WaitingCase,
    ];
    await decideCase(world.ctx(other), verdict(third));
    const together = [second, third].map((one) => ({
      caseId: one.caseId,
      verdict: "legitimate" as const,
      typology: null,
    }));
    await expect(decideCase(world.ctx(reviewer), verdict(main, { together }))).rejects.toBeInstanceOf(
      KnownError,
    );
    expect(await countOf(decisions, main.transactionId)).toBe(0);
    await decideCase(world.ctx(reviewer), verdict(main, { together: together.slice(0, 1) }));
    const rows = await world.db
      .select({ transactionId: labelLog.transactionId, label: labelLog.label })
      .from(labelLog)
      .where(eq(labelLog.personId, reviewer.personId));
    expect(rows).toContainEqual({ transactionId: main.transactionId, label: 1 });
    expect(rows).toContainEqual({ transactionId: second.transactionId, label: -1 });
  });

  test("must be of the same account", async () => {
    const [reviewer] = reviewers as [PersonActor];
    const [main, stranger] = (await world.waitingCases(2, { seed: 301 })) as [WaitingCase, WaitingCase];
    const together = [{ caseId: stranger.caseId, verdict: "legitimate" as const, typology: null }];
    await expect(decideCase(world.ctx(reviewer), verdict(main, { together }))).rejects.toMatchObject({
      errors: [{ path: "together.0", message: "is of another account" }],
    });
  });
});

test("the grace period ends a minute before a hold does", async () => {
  const [reviewer] = reviewers as [PersonActor];
  const [waiting] = (await world.waitingCases(1, { seed: 400, held: true })) as [WaitingCase];
  const late = new Date(WORLD_START.getTime() + 86_400_000 - 5 * 60_000);
  const answer = await decideCase(world.ctx(reviewer, late), verdict(waiting));
  expect(answer.undoUntil).toBe(new Date(WORLD_START.getTime() + 86_400_000 - 60_000).toISOString());
});

test("a hold that has ended takes nothing off the grace period", async () => {
  const [reviewer] = reviewers as [PersonActor];
  const [waiting] = (await world.waitingCases(1, { seed: 401, held: true })) as [WaitingCase];
  await world.db
    .update(transactions)
    .set({ paymentState: "released" })
    .where(eq(transactions.id, waiting.transactionId));
  const after = new Date(WORLD_START.getTime() + 86_400_000 + 60_000);
  const answer = await decideCase(world.ctx(reviewer, after), verdict(waiting));
  expect(answer.undoUntil).toBe(new Date(after.getTime() + DEFAULT_TERMS.undoMinutes * 60_000).toISOString());
});

test("where reviewers take the next case only, one they picked themselves is refused", async () => {
  const [reviewer] = reviewers as [PersonActor];
  const [waiting] = (await world.waitingCases(1, { seed: 500 })) as [WaitingCase];
  const terms = { ...DEFAULT_TERMS, takeNextOnly: true };
  await world.db.update(policies).set({ terms }).where(eq(policies.version, 1));
  await expect(decideCase(world.ctx(reviewer), verdict(waiting))).rejects.toMatchObject({ code: "conflict" });
  await world.db.update(policies).set({ terms: DEFAULT_TERMS }).where(eq(policies.version, 1));
  await decideCase(world.ctx(reviewer), verdict(waiting));
});
