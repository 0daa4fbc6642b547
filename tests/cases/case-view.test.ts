import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { cases } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { transactions } from "@/db/schema/transactions";
import { assignCase } from "@/lib/cases/assign";
import { claimCase } from "@/lib/cases/claim";
import { escalateCase } from "@/lib/cases/escalate";
import { casesChanged } from "@/lib/cases/notify";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { caseView } from "@/lib/cases/read";
import { CaseView } from "@/lib/cases/schema";
import type { PersonActor } from "@/lib/context";
import { natsToDecibans, probabilityOf } from "@/lib/decibans";
import { decideCase } from "@/lib/decisions/decide";
import type { DecideInput } from "@/lib/decisions/schema";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { CATALOGUE_SPANS } from "@/lib/signals/what-would-change";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let auditor: PersonActor;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  mira = await world.person("reviewer");
  auditor = await world.person("auditor");
  return () => stopRanking(world.db);
});

async function waiting(count: number, options = {}): Promise<WaitingCase[]> {
  const made = await world.waitingCases(count, { seed: seed++, ...options });
  casesChanged(made.map(({ caseId }) => caseId));
  return made;
}
const one = async (options = {}) => ((await waiting(1, options)) as [WaitingCase])[0];
const view = (id: string, person = mira) => caseView(world.ctx(person), { id });

const decide = (id: string, more: Partial<DecideInput> = {}, person = mira) =>
  decideCase(world.ctx(person), {
    id,
    verdict: "fraudulent",
    typology: "details_theft",
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
    ...more,
  });

function sumOf(evidence: NonNullable<CaseView["evidence"]>): number {
  const signals = evidence.signals.reduce((sum, { decibans }) => sum + decibans, 0);
  return evidence.baseRateDecibans + signals + evidence.littleExperienceDecibans;
}

describe("the evidence on a case", () => {
  test("adds up: base rate, every signal and the pull are the total, and the total is the probability", async () => {
    for (const { caseId } of await waiting(20)) await decide(caseId);
    const { caseId } = await one();
    const shown = await view(caseId);
    expect(CaseView.parse(shown)).toEqual(shown);
    const evidence = shown.evidence as NonNullable<CaseView["evidence"]>;
    expect(evidence.signals.length).toBeGreaterThan(20);
    expect(Math.abs(sumOf(evidence) - evidence.totalDecibans)).toBeLessThan(1e-9);
    expect(10 ** (evidence.totalDecibans / 10)).toBeCloseTo(
      evidence.probability / (1 - evidence.probability),
      9,
    );
    expect(evidence.littleExperienceDecibans).not.toBe(0);
  });

  test("names the three signals that most would change it, each with the score taken anew without it", async () => {
    const made = await world.waitingCases(11, { seed: 101 });
    casesChanged(made.map(({ caseId }) => caseId));
    const [{ caseId, vector }, ...others] = made as [WaitingCase, ...WaitingCase[]];
    for (const other of others) await decide(other.caseId);
    const { evidence } = await view(caseId);
    const { scorer } = await readScorerInUse(world.db);
    const { logit } = scorer.score(vector);
    const all = CATALOGUE_SPANS.map(({ key, from, to }) => ({
      key,
      logit: scorer.score(vector.slice().fill(0, from, to)).logit,
    })).sort((a, b) => Math.abs(b.logit - logit) - Math.abs(a.logit - logit));
    expect(evidence?.withoutSignals?.map(({ key }) => key)).toEqual(all.slice(0, 3).map(({ key }) => key));
    for (const [at, line] of (evidence?.withoutSignals ?? []).entries()) {
      expect(line.totalDecibans).toBe(natsToDecibans(all[at]?.logit ?? Number.NaN));
      expect(line.probability).toBe(probabilityOf(all[at]?.logit ?? Number.NaN));
      expect(line.changeDecibans).toBeCloseTo(line.totalDecibans - (evidence?.totalDecibans ?? 0), 9);
    }
  });

  test("stays what was shown once a verdict stands, whatever the scorer learns after it", async () => {
    const { caseId } = await one();
    const before = await view(caseId);
    await decide(caseId);
    for (const { caseId: other } of await waiting(5))
      await decide(other, { verdict: "legitimate", typology: null });
    const after = await view(caseId);
    // What would change it is told while it can still matter; behind the verdict "Derive again" tells it.
    expect(after.evidence).toEqual({ ...before.evidence, withoutSignals: null });
    expect(after.state).toBe("decided");
  });

  test("is hidden until the verdict where the policy says so, and shown after it", async () => {
    const { caseId } = await one();
    const hide = (hideScoreUntilVerdict: boolean) =>
      world.db
        .update(policies)
        .set({ terms: { ...DEFAULT_TERMS, hideScoreUntilVerdict } })
        .where(eq(policies.version, 1));
    await hide(true);
    try {
      expect((await view(caseId)).evidence).toBeNull();
      await decide(caseId, { scoreWasHidden: true });
      expect((await view(caseId)).evidence).not.toBeNull();
    } finally {
      await hide(false);
    }
  });
});

describe("the links of a case", () => {
  test("name payments of the same account, card, device and counterparty once each, with their verdicts", async () => {
    const [main, sameAccount, sameCard, sameDevice] = (await waiting(4, { accountId: "ACC-LINKED" })) as [
      WaitingCase,
      WaitingCase,
      WaitingCase,
      WaitingCase,
    ];
    const set = (one: WaitingCase, values: Partial<typeof transactions.$inferInsert>) =>
      world.db.update(transactions).set(values).where(eq(transactions.id, one.transactionId));
    await set(main, { cardRef: "card-7", deviceId: "device-7", counterpartyId: "SHOP-7" });
    await set(sameAccount, { cardRef: "card-7", counterpartyId: "SHOP-8" });
    await set(sameCard, { accountId: "ACC-OTHER", cardRef: "card-7", counterpartyId: "SHOP-9" });
    await set(sameDevice, { accountId: "ACC-THIRD", deviceId: "device-7", counterpartyId: "SHOP-7" });
    await decide(sameCard.caseId);
    const { links } = await view(main.caseId);
    const byId = new Map(links.map((link) => [link.transactionId, link]));
    expect(links).toHaveLength(3);
    expect(byId.get(sameAccount.transactionId)).toMatchObject({
      by: "account",
      together: true,
      verdict: null,
    });
    expect(byId.get(sameCard.transactionId)).toMatchObject({
      by: "card",
      together: false,
      verdict: "fraudulent",
      state: "decided",
    });
    expect(byId.get(sameDevice.transactionId)).toMatchObject({ by: "device", together: false });
    // What waits is shown with its present score, which the verdict on the card has moved.
    const present = (await view(sameDevice.caseId)).evidence?.probability as number;
    expect(byId.get(sameDevice.transactionId)?.probability).toBeCloseTo(present, 9);
  });

  test("offer the account's passed payments of the same day to be decided together, and no older ones", async () => {
    const main = await one({ accountId: "ACC-DAY" });
    const passed = (hours: number) =>
      insertPassed("ACC-DAY", new Date(WORLD_START.getTime() + hours * 3_600_000));
    const [near, far] = [await passed(-23), await passed(-25)];
    const { links } = await view(main.caseId);
    const link = (id: string) => links.find(({ transactionId }) => transactionId === id);
    expect(link(near)).toMatchObject({ caseId: null, state: null, together: true });
    expect(link(far)).toMatchObject({ caseId: null, together: false });
  });
});

async function insertPassed(accountId: string, occurredAt: Date): Promise<string> {
  const like = await one();
  await world.db
    .update(transactions)
    .set({ accountId, occurredAt })
    .where(eq(transactions.id, like.transactionId));
  await world.db.delete(cases).where(eq(cases.id, like.caseId));
  return like.transactionId;
}

describe("the timeline", () => {
  test("tells what happened, by whom, in order, without the words of the notes", async () => {
    const { caseId } = await one();
    const supervisor = await world.person("supervisor");
    await claimCase(world.ctx(mira), { id: caseId });
    await escalateCase(world.ctx(mira), { id: caseId, note: "A colleague's account" });
    await claimCase(world.ctx(supervisor), { id: caseId });
    await decide(caseId, { seenVersion: 4 }, supervisor);
    await undoDecision(world.ctx(supervisor), { id: caseId });
    const shown = await view(caseId, supervisor);
    expect(shown.timeline.map(({ act, by, detail }) => [act, by, detail])).toEqual([
      ["case.opened", "Cupel", "alert, zone review"],
      ["case.claimed", mira.name, null],
      ["case.escalated", mira.name, null],
      ["case.claimed", supervisor.name, null],
      ["case.decided", supervisor.name, "fraudulent, details theft"],
      ["decision.undone", supervisor.name, "fraudulent"],
    ]);
    expect(shown.decisions).toMatchObject([{ stands: false, verdict: "fraudulent" }]);
    expect(shown).toMatchObject({ state: "claimed", mine: true, notes: [{ body: "A colleague's account" }] });
  });
});

describe("who may read a case", () => {
  test("auditors and keys for reading see all of it; a reviewer sees what is theirs, or was decided by them", async () => {
    const { caseId } = await one();
    const tove = await world.person("reviewer");
    const supervisor = await world.person("supervisor");
    await assignCase(world.ctx(supervisor), { id: caseId, personId: tove.personId });
    await expect(view(caseId)).rejects.toMatchObject({ code: "forbidden" });
    expect((await view(caseId, tove)).mine).toBe(false);
    expect((await view(caseId, auditor)).assignedTo).toEqual({ id: tove.personId, name: tove.name });
    const key = { kind: "key" as const, id: "k", source: "s", scopes: ["cases:read" as const] };
    expect((await caseView(world.ctx(key), { id: caseId })).draft).toBe("");
    await expect(view(caseId, await world.person("administrator"))).rejects.toMatchObject({
      code: "forbidden",
    });
    await decide(caseId, { seenVersion: 2 }, tove);
    expect((await view(caseId, tove)).state).toBe("decided");
  });

  test("a case that is not there is not found", async () => {
    const id = "0197a000-0000-7000-8000-000000000000";
    await expect(view(id)).rejects.toMatchObject({ code: "not_found" });
  });
});
