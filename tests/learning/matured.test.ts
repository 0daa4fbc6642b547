import { and, asc, eq, isNull } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { bytesToVector } from "@/db/columns";
import { policies } from "@/db/schema/policies";
import { labelLog } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { labelledEntities, transactions } from "@/db/schema/transactions";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { learnMatured } from "@/lib/learning/learn-matured";
import { labelsInForce } from "@/lib/learning/place";
import { replayLog } from "@/lib/learning/replay";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { PolicyTerms } from "@/lib/policy/schema";
import { createScorer, type Label } from "@/lib/scorer";
import { receiveTransactions } from "@/lib/transactions/receive";
import { sendOutcome } from "../outcomes/payments";
import { testWorld, type World } from "../support/world";
import { paymentItems } from "../transactions/payments";

const SYSTEM = { kind: "system", job: "learning.matured" } as const;
const JOB_RUNS_AT = new Date("2026-03-12T02:00:00Z");
/** Days whose labels would have become final a day before: seven days for cards, five for the rest. */
const CARD_DAY = "2026-03-04T06:00:00Z";
const OTHER_DAY = "2026-03-06T06:00:00Z";
const DECIDED_YESTERDAY = 4;

let world: World;
let reviewer: PersonActor;
let seed = 0;

/** An installation on which everything passes, with some decisions of the day before. */
beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  await setMatured("legitimate");
  const at = new Date("2026-03-11T10:00:00Z");
  for (const { caseId } of await world.waitingCases(DECIDED_YESTERDAY, { seed: 9, openedAt: at })) {
    await decide(caseId, "legitimate", at);
  }
});

async function setMatured(maturedUnlabelled: PolicyTerms["maturedUnlabelled"]): Promise<void> {
  const terms: PolicyTerms = {
    ...DEFAULT_TERMS,
    reviewThreshold: { kind: "fixed", probability: 0.99999 },
    holdThreshold: 0.999999,
    sampleShare: 0,
    maturityDays: { cards: 7, other: 5 },
    maturedUnlabelled,
  };
  await world.db.update(policies).set({ terms }).where(eq(policies.version, 1));
}

function decide(id: string, verdict: "fraudulent" | "legitimate", at: Date, together: string[] = []) {
  const finding = (found: typeof verdict) => ({
    verdict: found,
    typology: found === "fraudulent" ? ("other" as const) : null,
  });
  return decideCase(world.ctx(reviewer, at), {
    id,
    ...finding(verdict),
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: together.map((transactionId) => ({ transactionId, ...finding("fraudulent") })),
  });
}

/** Payments that passed; each call under identifiers of its own. @returns their identifiers */
async function passed(count: number, from: string, change: Record<string, unknown> = {}): Promise<string[]> {
  seed += 1;
  const items = paymentItems(count, change, from).map((item) => ({
    ...item,
    externalId: `${seed}-${item.externalId}`,
  }));
  const results = await receiveTransactions(world.ctx(SYSTEM, JOB_RUNS_AT), { source: "test", items });
  return results.map((result) => {
    const { status, action, transactionId } = result;
    if (status !== "created" || action !== "pass" || transactionId === null)
      throw new Error("A payment did not pass");
    return transactionId;
  });
}

const mature = () => learnMatured(world.ctx(SYSTEM, JOB_RUNS_AT), new AbortController().signal);
const maturedRows = () =>
  world.db
    .select()
    .from(labelLog)
    .where(and(eq(labelLog.kind, "matured"), isNull(labelLog.place)))
    .orderBy(asc(labelLog.seq));

/** The weights of a log in which these transactions' matured labels never stood. */
async function stateWithoutMatured(of: ReadonlySet<string>): Promise<Buffer> {
  const { scorer } = await readScorerInUse(world.db);
  const expected = createScorer(scorer.options);
  const rows = await world.db
    .select()
    .from(labelLog)
    .where(isNull(labelLog.place))
    .orderBy(asc(labelLog.seq));
  for (const { kind, transactionId, vector, label } of rows) {
    if (kind !== "matured" || !of.has(transactionId)) expected.learn(bytesToVector(vector), label as Label);
  }
  return Buffer.from(expected.snapshot());
}

const stateNow = async () => Buffer.from((await readScorerInUse(world.db)).scorer.snapshot());

describe("payments that nobody labelled", () => {
  test("teach nothing while the policy ignores them", async () => {
    await setMatured("ignored");
    await passed(3, CARD_DAY);
    await mature();
    expect(await maturedRows()).toEqual([]);
    await setMatured("legitimate");
  });

  test("are learned as legitimate, no more of them than were decided the day before, and stay unlabelled", async () => {
    await passed(6, CARD_DAY);
    await passed(6, OTHER_DAY, { channel: "credit_transfer", cardRef: undefined });
    // A day too early or too late for their kind.
    const others = [
      ...(await passed(9, OTHER_DAY)),
      ...(await passed(9, CARD_DAY, { channel: "credit_transfer", cardRef: undefined })),
    ];
    await mature();
    const rows = await maturedRows();
    expect(rows).toHaveLength(DECIDED_YESTERDAY);
    for (const row of rows) {
      expect(others).not.toContain(row.transactionId);
      expect(row).toMatchObject({ label: -1, weight: 1, caseId: null, personId: null });
      expect(row.loss).toBeGreaterThan(0);
      const [payment] = await world.db
        .select({ label: transactions.label })
        .from(transactions)
        .where(eq(transactions.id, row.transactionId));
      expect(payment?.label).toBeNull();
      const marks = await world.db
        .select()
        .from(labelledEntities)
        .where(eq(labelledEntities.transactionId, row.transactionId));
      expect(marks).toEqual([]);
    }
    const entries = await world.db.select().from(trail).where(eq(trail.act, "labels.matured"));
    expect(entries).toHaveLength(1);
    expect(JSON.parse(entries[0]?.facts ?? "")).toMatchObject({
      count: DECIDED_YESTERDAY,
      lastSeq: rows.at(-1)?.seq,
    });
  });

  test("are drawn once each, and never where a case, an outcome or a label has touched them", async () => {
    const touched = new Set((await maturedRows()).map((row) => row.transactionId));
    const [reported] = await passed(1, CARD_DAY);
    await sendOutcome(world, await externalIdOf(reported as string));
    for (let run = 0; run < 6; run++) await mature();
    const rows = await maturedRows();
    const ids = rows.map((row) => row.transactionId);
    expect(new Set(ids).size).toBe(ids.length);
    // 3 + 6 card payments and 6 transfers of their days are free; the one reported is not.
    expect(ids).toHaveLength(15);
    expect(ids).not.toContain(reported);
    for (const id of touched) expect(ids.filter((each) => each === id)).toHaveLength(1);
  });
});

describe("a finding about a payment that has matured", () => {
  test("by an outcome leaves the weights bit for bit as if it had never been taken for legitimate", async () => {
    const [first] = await maturedRows();
    const transactionId = first?.transactionId as string;
    const before = await stateNow();
    await sendOutcome(world, await externalIdOf(transactionId));
    expect((await stateNow()).equals(before)).toBe(false);
    expect((await stateNow()).equals(await stateWithoutMatured(new Set([transactionId])))).toBe(true);
    const label = (await labelsInForce(world.db, [transactionId])).get(transactionId);
    expect(label).toMatchObject({ label: 1, kind: "outcome" });
    lifted.add(transactionId);
  });

  test("by a verdict does so too, and the verdict is learned at its own place", async () => {
    const at = new Date("2026-03-12T09:00:00Z");
    const rows = (await maturedRows()).filter(({ transactionId }) => !lifted.has(transactionId));
    const [row] = rows;
    const transactionId = row?.transactionId as string;
    const [payment] = await world.db.select().from(transactions).where(eq(transactions.id, transactionId));
    const [main] = await world.waitingCases(1, {
      seed: 11,
      accountId: payment?.accountId ?? "",
      openedAt: payment?.occurredAt ?? at,
    });
    await decide(main?.caseId as string, "fraudulent", at, [transactionId]);
    lifted.add(transactionId);
    expect((await stateNow()).equals(await stateWithoutMatured(lifted))).toBe(true);
    const label = (await labelsInForce(world.db, [transactionId])).get(transactionId);
    expect(label).toMatchObject({ label: 1, kind: "decision" });
    expect(label?.place).toBeGreaterThan(row?.seq ?? 0);
    const [after] = await world.db.select().from(transactions).where(eq(transactions.id, transactionId));
    expect(after?.label).toBe(1);
  });

  test("keeps the log such that living it again comes to the same bits", async () => {
    const report = await replayLog(world.db);
    expect(report).toMatchObject({
      firstDifferingLoss: null,
      cumulativeLossEqual: true,
      differingStates: [],
    });
    expect(report.rows).toBeGreaterThan(15);
  });
});

/** Whose matured labels findings have taken away so far. */
const lifted = new Set<string>();

async function externalIdOf(id: string): Promise<string> {
  const [row] = await world.db.select().from(transactions).where(eq(transactions.id, id));
  return row?.externalId ?? "";
}
