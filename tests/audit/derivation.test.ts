// Long: one installation lives through some hours, and every promise is held against all of them.
import { desc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { Chance } from "@/db/demo/random";
import { cases, decisions } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import { scores } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { deriveScore } from "@/lib/audit/derive-score";
import { listScores } from "@/lib/audit/list-scores";
import { DerivationView, ScoresView } from "@/lib/audit/schema";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { refreshLinkedCases } from "@/lib/cases/refresh";
import type { Context, PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { rebaseScorer } from "@/lib/learning/rebase";
import { newId } from "@/lib/new-id";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { receiveTransactions } from "@/lib/transactions/receive";
import { testWorld, WORLD_START, type World } from "../support/world";
import { paymentItems } from "../transactions/payments";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;
let auditor: PersonActor;
let clockMs = WORLD_START.getTime();
const later = () => {
  clockMs += 60_000;
  return new Date(clockMs);
};
const { signal } = new AbortController();

const setTerms = (terms: Partial<typeof DEFAULT_TERMS>) =>
  world.db
    .update(policies)
    .set({ terms: { ...DEFAULT_TERMS, ...terms } })
    .where(eq(policies.version, 1));
/** Everything that comes in is looked at. */
const REVIEW_ALL = { reviewThreshold: { kind: "fixed", probability: 1e-6 }, sampleShare: 0 } as const;

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
  auditor = await world.person("auditor");
  await setTerms(REVIEW_ALL);
  await liveThroughSomeHours();
  return () => stopRanking(world.db);
});

/** Payments arrive in batches between decisions, undos, corrections, refreshes and a new base rate. */
async function liveThroughSomeHours(): Promise<void> {
  const chance = new Chance(11);
  for (let hour = 0; hour < 6; hour++) {
    await receive(`hour-${hour}`, 20);
    const waiting = await world.db.select({ id: cases.id }).from(cases).where(eq(cases.state, "open"));
    for (const { id } of waiting.slice(0, 12)) {
      await decide(id, chance.hits(0.4));
      if (chance.hits(0.15)) await undoDecision(world.ctx(reviewer, later()), { id });
    }
    await correctSome();
    await refreshLinkedCases(world.ctx({ kind: "system", job: "test" }, later()), signal);
    if (hour === 3)
      await inTransaction(world.db, (tx) => rebaseScorer(world.ctx(supervisor, later()), tx, 0.05));
  }
}

const sender = (): Context =>
  world.ctx({ kind: "key", id: newId(), source: "shop", scopes: ["transactions:write"] }, later());

async function receive(source: string, count: number): Promise<void> {
  await receiveTransactions(sender(), { source, items: paymentItems(count) });
}

async function decide(id: string, fraudulent: boolean): Promise<void> {
  const [row] = await world.db.select({ revision: cases.revision }).from(cases).where(eq(cases.id, id));
  await decideCase(world.ctx(reviewer, later()), {
    id,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "details_theft" : null,
    confidence: "sure",
    seenVersion: row?.revision ?? 0,
    scoreWasHidden: false,
    together: [],
  });
}

async function correctSome(): Promise<void> {
  const standing = await world.db
    .select({ caseId: decisions.caseId, verdict: decisions.verdict })
    .from(decisions)
    .where(eq(decisions.kind, "decision"))
    .orderBy(desc(decisions.id))
    .limit(20);
  const [one] = standing.filter(({ verdict }) => verdict === "legitimate").slice(4);
  if (!one) return;
  const [row] = await world.db.select({ state: cases.state }).from(cases).where(eq(cases.id, one.caseId));
  if (row?.state !== "decided") return;
  await correctDecision(world.ctx(supervisor, later()), {
    id: one.caseId,
    verdict: "fraudulent",
    typology: "other",
    reason: "The customer called",
  });
}

const allCases = () => world.db.select({ id: cases.id, transactionId: cases.transactionId }).from(cases);
const derive = (id: string, scoreId: string, who = auditor) =>
  deriveScore(world.ctx(who, later()), { id, scoreId });

/** The first case whose payment was scored in this way. */
async function scored(kind: "arrival" | "refresh" | "decision") {
  for (const { id } of await allCases()) {
    const { items } = await listScores(world.ctx(auditor), { id });
    const item = items.findLast((one) => one.kind === kind);
    if (item) return { id, ...item };
  }
  throw new Error(`No score of kind ${kind}`);
}

describe("the scores of a payment over time", () => {
  test("are listed oldest first with the scorer and the policy that gave them", async () => {
    const { id } = await scored("decision");
    const view = await listScores(world.ctx(auditor), { id });
    expect(ScoresView.parse(view)).toEqual(view);
    expect(view.items[0]).toMatchObject({ kind: "arrival", policyVersion: 1, decision: null });
    expect(view.items.map(({ at }) => at)).toEqual(view.items.map(({ at }) => at).toSorted());
    expect(view.items.at(-1)?.scorer?.name).toBe("First scorer");
    const versions = view.items.map(({ scorer }) => scorer?.version ?? 0);
    expect(versions).toEqual(versions.toSorted((a, b) => a - b));
  });

  test("all come out bit for bit, after undos, corrections, refreshes and a new base rate", async () => {
    const seen = { arrival: 0, refresh: 0, decision: 0 };
    const versions = new Set<number>();
    for (const { id } of await allCases()) {
      const { items } = await listScores(world.ctx(auditor), { id });
      for (const item of items) {
        const view = await derive(id, item.scoreId);
        expect(view).toMatchObject({ kind: item.kind, at: item.at, equal: true, problem: null });
        expect(view.derived).toBe(view.kept);
        expect(view.scorer).toEqual(item.scorer);
        seen[item.kind] += 1;
        versions.add(item.scorer?.version ?? 0);
      }
    }
    expect(seen.arrival).toBe(120);
    expect(seen.refresh).toBeGreaterThan(20);
    expect(seen.decision).toBeGreaterThan(60);
    expect(versions.size).toBeGreaterThan(60);
  });

  test("answer what would have changed them then, by the scorer of then", async () => {
    const { id, scoreId } = await scored("decision");
    const view = await derive(id, scoreId);
    expect(DerivationView.parse(view)).toEqual(view);
    expect(view.withoutSignals.length).toBeGreaterThan(0);
    const [strongest, next] = view.withoutSignals;
    expect(Math.abs(strongest?.changeDecibans ?? 0)).toBeGreaterThanOrEqual(
      Math.abs(next?.changeDecibans ?? 0),
    );
  });

  test("are not listed while the policy hides scores until the verdict, nor derived", async () => {
    const [waiting] = await world.db.select({ id: cases.id }).from(cases).where(eq(cases.state, "open"));
    const { items } = await listScores(world.ctx(auditor), { id: waiting?.id as string });
    await setTerms({ ...REVIEW_ALL, hideScoreUntilVerdict: true });
    try {
      const hidden = await listScores(world.ctx(reviewer, later()), { id: waiting?.id as string });
      expect(hidden).toEqual({ hidden: true, leftOut: 0, items: [] });
      await expect(derive(waiting?.id as string, items[0]?.scoreId as string)).rejects.toMatchObject({
        code: "forbidden",
      });
    } finally {
      await setTerms(REVIEW_ALL);
    }
  });
});

describe("a record that was tampered with is told", () => {
  // The database refuses to change a score; who owns the database can take that away.
  beforeAll(async () => {
    const owner = createDatabase(world.ownerUrl, 1);
    await owner.db.execute("DROP TRIGGER scores_no_update");
    await owner.close();
  });

  /** Changes one row for the length of a test. */
  async function withScore(
    scoreId: string,
    change: (row: typeof scores.$inferSelect) => Partial<Pick<typeof row, "vector" | "scorerVersion">>,
    look: () => Promise<void>,
  ): Promise<void> {
    const where = eq(scores.id, Number(scoreId));
    const [row] = await world.db.select().from(scores).where(where);
    if (!row) throw new Error("no such score");
    const { vector, scorerVersion } = row;
    await world.db.update(scores).set(change(row)).where(where);
    try {
      await look();
    } finally {
      await world.db.update(scores).set({ vector, scorerVersion }).where(where);
    }
  }

  test("where the last bit of the number differs", async () => {
    const { id, scoreId } = await scored("refresh");
    const { kept } = await derive(id, scoreId);
    const nudged = nextDouble(kept);
    expect(nudged).not.toBe(kept);
    await world.db
      .update(scores)
      .set({ logit: nudged })
      .where(eq(scores.id, Number(scoreId)));
    const view = await derive(id, scoreId);
    expect(view).toMatchObject({ kept: nudged, derived: kept, equal: false, problem: null });
    await world.db
      .update(scores)
      .set({ logit: kept })
      .where(eq(scores.id, Number(scoreId)));
    expect((await derive(id, scoreId)).equal).toBe(true);
  });

  test("where a signal of the vector differs", async () => {
    const { id, scoreId } = await scored("arrival");
    await withScore(
      scoreId,
      ({ vector }) => {
        const forged = Buffer.from(vector);
        forged.writeDoubleLE(forged.readDoubleLE(0) + 0.25, 0);
        return { vector: forged };
      },
      async () => expect(await derive(id, scoreId)).toMatchObject({ equal: false, problem: null }),
    );
  });

  test("where the vector has been cut or holds what is no number", async () => {
    const { id, scoreId } = await scored("arrival");
    const problem = expect.stringContaining("not those of its scorer");
    const look = async () =>
      expect(await derive(id, scoreId)).toMatchObject({ equal: false, derived: null, problem });
    await withScore(scoreId, ({ vector }) => ({ vector: vector.subarray(0, 16) }), look);
    await withScore(scoreId, () => ({ vector: vectorToBytes(Float64Array.of(Number.NaN, 1)) }), look);
  });

  test("where it names a version that is another's, or nobody's", async () => {
    const { id, scoreId } = await scored("refresh");
    await withScore(
      scoreId,
      ({ scorerVersion }) => ({ scorerVersion: scorerVersion - 1 }),
      async () => expect((await derive(id, scoreId)).equal).toBe(false),
    );
    const { version } = await readScorerInUse(world.db);
    await withScore(
      scoreId,
      () => ({ scorerVersion: version + 1 }),
      async () => {
        expect(await derive(id, scoreId)).toMatchObject({
          equal: false,
          derived: null,
          scorer: null,
          problem: `No scorer ever had version ${version + 1}.`,
        });
      },
    );
  });

  test("where a contribution kept with a verdict differs, though the total does not", async () => {
    const { id, scoreId } = await scored("decision");
    const where = eq(decisions.id, scoreId);
    const [row] = await world.db.select({ evidence: decisions.evidence }).from(decisions).where(where);
    const evidence = row?.evidence as Buffer;
    const forged = Buffer.from(evidence);
    forged.writeUInt8(forged.readUInt8(0) ^ 1, 0);
    await world.db.update(decisions).set({ evidence: forged }).where(where);
    const view = await derive(id, scoreId);
    expect(view.equal).toBe(false);
    expect(view.derived).toBe(view.kept);
    await world.db.update(decisions).set({ evidence }).where(where);
  });
});

describe("who may have a score derived", () => {
  test("reviewers for cases they decided, and not for others'", async () => {
    const { id, scoreId } = await scored("decision");
    const other = await world.person("reviewer");
    expect((await derive(id, scoreId, reviewer)).equal).toBe(true);
    await expect(derive(id, scoreId, other)).rejects.toMatchObject({ code: "forbidden" });
    const mine = await listScores(world.ctx(reviewer), { id });
    expect(mine.items.every(({ derivable }) => derivable)).toBe(true);
    const [waiting] = await world.db.select({ id: cases.id }).from(cases).where(eq(cases.state, "open"));
    const theirs = await listScores(world.ctx(other), { id: waiting?.id as string });
    expect(theirs.items.length).toBeGreaterThan(0);
    expect(theirs.items.some(({ derivable }) => derivable)).toBe(false);
  });

  test("administrators have no business with it", async () => {
    const { id, scoreId } = await scored("decision");
    const administrator = await world.person("administrator");
    await expect(derive(id, scoreId, administrator)).rejects.toMatchObject({ code: "forbidden" });
    await expect(listScores(world.ctx(administrator), { id })).rejects.toMatchObject({ code: "forbidden" });
  });

  test("a reading by those who read everybody's is in the trail, a reviewer's own is not", async () => {
    const { id, scoreId } = await scored("arrival");
    const readings = () =>
      world.db.select().from(trail).where(eq(trail.subjectId, scoreId)).orderBy(desc(trail.seq));
    const before = await readings();
    await derive(id, scoreId, auditor);
    const [entry, ...older] = await readings();
    expect(older).toHaveLength(before.length);
    expect(entry).toMatchObject({ act: "trail.read", subjectKind: "score", actorId: auditor.personId });
    expect(JSON.parse(entry?.facts ?? "{}")).toEqual({ caseId: id, derivedEqual: true });
    await derive(id, scoreId, reviewer);
    expect(await readings()).toHaveLength(before.length + 1);
  });

  test("a score of another case, and one that is not there, are not found", async () => {
    const { id, scoreId } = await scored("arrival");
    const other = (await allCases()).find((one) => one.id !== id);
    await expect(derive(other?.id as string, scoreId)).rejects.toMatchObject({ code: "not_found" });
    await expect(derive(id, "999999")).rejects.toMatchObject({ code: "not_found" });
    await expect(derive(id, newId())).rejects.toMatchObject({ code: "not_found" });
    await expect(derive(newId(), scoreId)).rejects.toMatchObject({ code: "not_found" });
  });
});

/** The double next to it, farther from 0. */
function nextDouble(value: number): number {
  const bits = new BigInt64Array(Float64Array.of(value).buffer);
  bits[0] = (bits[0] ?? 0n) + 1n;
  return new Float64Array(bits.buffer)[0] as number;
}
