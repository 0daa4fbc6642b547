// Long: every promise about taking a person's labels out, on installations that live through the same hours.
import { asc, desc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { decisions, ledger } from "@/db/schema/cases";
import { labelLog } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { labelledEntities, transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { approveProposal } from "@/lib/approvals/approve";
import { casesChanged } from "@/lib/cases/notify";
import { rankingOf, stopRanking } from "@/lib/cases/ranking/ranking";
import type { PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { findRemovals } from "@/lib/learning/find-removals";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { RemovalPreview } from "@/lib/learning/influence-schema";
import { previewRemoval } from "@/lib/learning/preview-removal";
import { proposeRemoval } from "@/lib/learning/propose-removal";
import { foldRemovalAhead, removeLabels, spanOf } from "@/lib/learning/remove-labels";
import { foldAhead } from "@/lib/learning/replace";
import { replayLog } from "@/lib/learning/replay";
import { sendOutcome } from "../outcomes/payments";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

/** One installation and its people; `ill` is the one whose labels are taken out. */
type Team = {
  world: World;
  ill: PersonActor;
  well: PersonActor;
  supervisor: PersonActor;
  riskManager: PersonActor;
  clock: { minutes: number };
};

async function newTeam(): Promise<Team> {
  const world = await testWorld();
  return {
    world,
    ill: await world.person("reviewer", "supervisor"),
    well: await world.person("reviewer"),
    supervisor: await world.person("supervisor"),
    riskManager: await world.person("risk_manager"),
    clock: { minutes: 0 },
  };
}

function later({ clock }: Team): Date {
  clock.minutes += 1;
  return new Date(WORLD_START.getTime() + clock.minutes * 60_000);
}

async function decide(team: Team, who: PersonActor, on: WaitingCase, fraudulent: boolean): Promise<string> {
  const [row] = await team.world.db.query.cases.findMany({ where: (rows) => eq(rows.id, on.caseId) });
  const { decisionId } = await decideCase(team.world.ctx(who, later(team)), {
    id: on.caseId,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "details_theft" : null,
    confidence: "sure",
    seenVersion: row?.revision ?? 0,
    scoreWasHidden: false,
    together: [],
  });
  return decisionId;
}

const correct = (team: Team, who: PersonActor, on: WaitingCase, fraudulent: boolean) =>
  correctDecision(team.world.ctx(who, later(team)), {
    id: on.caseId,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "other" : null,
    reason: "Found otherwise",
  });

const undo = (team: Team, who: PersonActor, on: WaitingCase) =>
  undoDecision(team.world.ctx(who, later(team)), { id: on.caseId });

const remove = async (team: Team, span: { from?: string; to?: string } = {}) => {
  const { approvalId } = await proposeRemoval(team.world.ctx(team.supervisor, later(team)), {
    personId: team.ill.personId,
    reason: "Their account was not used by themselves",
    ...span,
  });
  return approveProposal(team.world.ctx(team.riskManager, later(team)), { id: approvalId });
};

const stateOf = async ({ world }: Team) => Buffer.from((await readScorerInUse(world.db)).scorer.snapshot());
const isIll = (n: number) => n % 3 === 1;

/** The same hours with the ill one at work, or without them. Vectors come from the seed, so both see the same cases. */
async function live(team: Team, illWorks: boolean): Promise<WaitingCase[]> {
  const made = await team.world.waitingCases(60, { seed: 8 });
  casesChanged(made.map(({ caseId }) => caseId));
  for (const [n, on] of made.slice(0, 48).entries()) {
    const who = isIll(n) ? team.ill : team.well;
    if (who === team.well || illWorks) await decide(team, who, on, n % 4 < 2);
    // Taken back: of the ill one, and of the other.
    if (n === 19 && illWorks) await undo(team, team.ill, on);
    if (n === 20) await undo(team, team.well, on);
    // Two corrections of the other's findings, one by the ill one and one that stands.
    if (n === 30 && illWorks) await correct(team, team.ill, made[12] as WaitingCase, false);
    if (n === 31) await correct(team, team.supervisor, made[15] as WaitingCase, true);
    if (n === 40) await sendOutcome(team.world, made[9] as WaitingCase);
  }
  return made;
}

describe("taking one person's labels out", () => {
  let team: Team;
  let without: Team;
  let made: WaitingCase[];
  let before: { decisions: unknown; ledger: unknown; labels: unknown };

  const records = async ({ world: { db } }: Team) => ({
    decisions: await db.select().from(decisions).orderBy(asc(decisions.id)),
    ledger: await db.select().from(ledger).orderBy(asc(ledger.id)),
    labels: await db
      .select({ id: transactions.id, label: transactions.label })
      .from(transactions)
      .orderBy(asc(transactions.id)),
  });

  beforeAll(async () => {
    [team, without] = await Promise.all([newTeam(), newTeam()]);
    made = await live(team, true);
    await live(without, false);
    before = await records(team);
    return async () => {
      await stopRanking(team.world.db);
      await stopRanking(without.world.db);
    };
  });

  test("is previewed in full: how many, how far the weights and the scores would move", async () => {
    const preview = await previewRemoval(team.world.ctx(team.riskManager), { personId: team.ill.personId });
    expect(RemovalPreview.parse(preview)).toEqual(preview);
    // Sixteen of forty-eight, one of which they took back, and one correction of another's.
    expect(preview).toMatchObject({ labels: 16, givenBack: 1, payments: { of: "waiting", count: 14 } });
    const now = (await readScorerInUse(team.world.db)).scorer;
    const then = (await readScorerInUse(without.world.db)).scorer;
    const gap = now.weights().map((weight, i) => weight - (then.weights()[i] as number));
    expect(preview.effect?.weightDistance).toBeCloseTo(Math.hypot(...gap), 12);
    expect(preview.effect?.signals).toHaveLength(3);
    const changes = made
      .slice(48)
      .map(({ vector }) => Math.abs(now.score(vector).logit - then.score(vector).logit));
    const decibans = 10 / Math.LN10;
    expect(preview.effect?.largestDecibans).toBeGreaterThanOrEqual(Math.max(...changes) * decibans - 1e-9);
    expect(preview.effect?.meanDecibans).toBeGreaterThan(0);
  });

  test("needs two people, none of whom is the one concerned", async () => {
    const { world, ill, supervisor, well, riskManager } = team;
    const wish = { personId: ill.personId, reason: "They were not themselves" };
    const refused = { code: "forbidden" };
    await expect(proposeRemoval(world.ctx(ill), wish)).rejects.toMatchObject(refused);
    await expect(proposeRemoval(world.ctx(well), wish)).rejects.toMatchObject(refused);
    await expect(proposeRemoval(world.ctx(riskManager), wish)).rejects.toMatchObject(refused);
    const { approvalId: id } = await proposeRemoval(world.ctx(supervisor), wish);
    await expect(approveProposal(world.ctx(supervisor), { id })).rejects.toMatchObject(refused);
    await expect(approveProposal(world.ctx(ill), { id })).rejects.toMatchObject(refused);
    await expect(proposeRemoval(world.ctx(supervisor), wish)).rejects.toMatchObject({ code: "conflict" });
    const [untouched] = await world.db.select().from(labelLog).where(eq(labelLog.kind, "removal"));
    expect(untouched).toBeUndefined();
    await approveProposal(world.ctx(riskManager), { id });
  });

  test("leaves the weights bit for bit as if that person had never labelled", async () => {
    expect((await stateOf(team)).equals(await stateOf(without))).toBe(true);
    const held = await readScorerInUse(team.world.db);
    expect(held.scorer.labels).toBe((await readScorerInUse(without.world.db)).scorer.labels);
  });

  test("leaves verdicts, the ledger and the payments' labels as they were", async () => {
    expect(await records(team)).toEqual(before);
  });

  test("takes the labels out of what history signals are drawn from", async () => {
    const entities = async (on: WaitingCase | undefined) =>
      team.world.db
        .select({ label: labelledEntities.label })
        .from(labelledEntities)
        .where(eq(labelledEntities.transactionId, on?.transactionId ?? ""));
    expect(await entities(made[1])).toEqual([]);
    expect(new Set((await entities(made[0])).map(({ label }) => label))).toEqual(new Set([1]));
    // The other's finding that the ill one had corrected holds again.
    expect(new Set((await entities(made[12])).map(({ label }) => label))).toEqual(new Set([1]));
  });

  test("ranks the waiting cases by the scorer that is left", async () => {
    const { scorer } = await readScorerInUse(without.world.db);
    const waiting = made[50] as WaitingCase;
    const logit = await rankingOf(team.world.db).read(later(team), (view) => view.logitOf(waiting.caseId));
    expect(logit).toBeCloseTo(scorer.score(waiting.vector).logit, 12);
  });

  test("is in the trail with counts and versions, and replays", async () => {
    const [entry] = await team.world.db
      .select()
      .from(trail)
      .where(eq(trail.act, "labels.removed"))
      .orderBy(desc(trail.seq));
    expect(entry).toMatchObject({ subjectKind: "person", subjectId: team.ill.personId });
    expect(entry?.actorId).toBe(team.riskManager.personId);
    const facts = JSON.parse(entry?.facts ?? "{}");
    expect(facts).toMatchObject({ labels: 16, givenBack: 1, labelledByOutcomes: 0, from: null, to: null });
    expect(facts.versionAfter - facts.versionBefore).toBe(16);
    const report = await replayLog(team.world.db);
    expect(report).toMatchObject({
      firstDifferingLoss: null,
      cumulativeLossEqual: true,
      differingStates: [],
    });
  });

  test("leaves nothing to remove a second time", async () => {
    const wish = { personId: team.ill.personId, reason: "Once more" };
    await expect(proposeRemoval(team.world.ctx(team.supervisor), wish)).rejects.toMatchObject({
      code: "rule_broken",
    });
  });
});

describe("after their labels were taken out", () => {
  let team: Team;
  beforeAll(async () => {
    team = await newTeam();
    return () => stopRanking(team.world.db);
  });

  let seed = 20;
  const one = async (): Promise<WaitingCase> => {
    seed += 1;
    const [made] = await team.world.waitingCases(1, { seed });
    casesChanged([made?.caseId as string]);
    return made as WaitingCase;
  };
  const logOf = ({ transactionId }: WaitingCase) =>
    team.world.db
      .select({ seq: labelLog.seq, place: labelLog.place, kind: labelLog.kind, label: labelLog.label })
      .from(labelLog)
      .where(eq(labelLog.transactionId, transactionId))
      .orderBy(asc(labelLog.seq));
  const labelOf = async ({ transactionId }: WaitingCase) =>
    (await team.world.db.select().from(transactions).where(eq(transactions.id, transactionId)))[0]?.label;
  const replays = async () =>
    expect(await replayLog(team.world.db)).toMatchObject({ firstDifferingLoss: null, differingStates: [] });

  test("a correction by somebody else labels again, at a place of its own", async () => {
    const on = await one();
    await decide(team, team.ill, on, true);
    await remove(team);
    await correct(team, team.supervisor, on, false);
    const [first, removal, again] = await logOf(on);
    expect(removal).toMatchObject({ place: first?.seq, kind: "removal", label: 0 });
    expect(again).toMatchObject({ place: null, kind: "correction", label: -1 });
    expect(await labelOf(on)).toBe(-1);
    await replays();
  });

  test("so does the same verdict once more, found by somebody else", async () => {
    const on = await one();
    await decide(team, team.ill, on, true);
    const again = () =>
      correctDecision(team.world.ctx(team.supervisor, later(team)), {
        id: on.caseId,
        verdict: "fraudulent",
        typology: "details_theft",
        reason: "Looked at again",
      });
    await expect(again()).rejects.toMatchObject({ code: "rule_broken" });
    await remove(team);
    await again();
    expect((await logOf(on)).at(-1)).toMatchObject({ place: null, kind: "correction", label: 1 });
    await replays();
  });

  test("one who takes the verdict back leaves no label, and the next verdict labels again", async () => {
    const on = await one();
    await decide(team, team.ill, on, true);
    await remove(team);
    expect(await labelOf(on)).toBe(1);
    await undo(team, team.ill, on);
    expect(await labelOf(on)).toBeNull();
    expect((await logOf(on)).map(({ kind }) => kind)).toEqual(["decision", "removal"]);
    await decide(team, team.ill, on, false);
    expect((await logOf(on)).at(-1)).toMatchObject({ place: null, kind: "decision", label: -1 });
    expect(await labelOf(on)).toBe(-1);
    await remove(team);
    await replays();
  });

  test("a correction to the customer's own misuse takes the payment's label away as ever", async () => {
    const on = await one();
    await decide(team, team.ill, on, true);
    await remove(team);
    await correctDecision(team.world.ctx(team.supervisor, later(team)), {
      id: on.caseId,
      verdict: "customer_misuse",
      typology: null,
      reason: "They paid and dispute it",
    });
    expect(await labelOf(on)).toBeNull();
    expect((await logOf(on)).map(({ kind }) => kind)).toEqual(["decision", "removal"]);
  });

  test("a chargeback that comes later labels the payment", async () => {
    const on = await one();
    await decide(team, team.ill, on, false);
    await remove(team);
    await sendOutcome(team.world, on);
    expect((await logOf(on)).at(-1)).toMatchObject({ place: null, kind: "outcome", label: 1 });
    expect(await labelOf(on)).toBe(1);
    await replays();
  });

  test("a chargeback that had come before and only agreed speaks again", async () => {
    const on = await one();
    await decide(team, team.ill, on, true);
    await sendOutcome(team.world, on);
    expect(await logOf(on)).toHaveLength(1);
    await remove(team);
    expect((await logOf(on)).map(({ kind, label }) => [kind, label])).toEqual([
      ["decision", 1],
      ["removal", 0],
      ["outcome", 1],
    ]);
    await replays();
  });

  test("what another has found since stays, and what another had found before holds again", async () => {
    const [corrected, wronged] = [await one(), await one()];
    await decide(team, team.ill, corrected, true);
    await correct(team, team.supervisor, corrected, false);
    await decide(team, team.well, wronged, true);
    await correct(team, team.ill, wronged, false);
    await remove(team);
    expect((await logOf(corrected)).map(({ kind }) => kind)).toEqual(["decision", "correction"]);
    expect((await logOf(wronged)).at(-1)).toMatchObject({ kind: "removal", label: 1 });
    await replays();
  });

  test("of a span of time only what they found in it is gone", async () => {
    const [early, within, late] = [await one(), await one(), await one()];
    await decide(team, team.ill, early, true);
    const from = later(team).toISOString();
    await decide(team, team.ill, within, true);
    const to = later(team).toISOString();
    await decide(team, team.ill, late, true);
    const preview = await previewRemoval(team.world.ctx(team.supervisor), {
      personId: team.ill.personId,
      from,
      to,
    });
    expect(preview).toMatchObject({ labels: 1, from, to });
    await remove(team, { from, to });
    const kinds = await Promise.all(
      [early, within, late].map(async (on) => (await logOf(on)).map(({ kind }) => kind)),
    );
    expect(kinds).toEqual([["decision"], ["decision", "removal"], ["decision"]]);
    await replays();
  });

  test("a span that ends before it begins, and a person who is not there, are refused", async () => {
    const at = WORLD_START.toISOString();
    const ask = (more: object) =>
      previewRemoval(team.world.ctx(team.supervisor), { personId: team.ill.personId, ...more });
    await expect(ask({ from: at, to: at })).rejects.toMatchObject({ code: "invalid" });
    await expect(ask({ personId: "0195f000-0000-7000-8000-00000000dead" })).rejects.toMatchObject({
      code: "not_found",
    });
  });

  test("labels that came between the fold ahead and the lock are in the state all the same", async () => {
    const made = await Promise.all([one(), one()]);
    for (const on of made) await decide(team, team.ill, on, true);
    const subject = { personId: team.ill.personId, from: null, to: null };
    const ahead = await foldRemovalAhead(team.world.db, subject);
    expect(ahead).toBeDefined();
    const [byIll, byWell] = [await one(), await one()];
    await decide(team, team.ill, byIll, false);
    await decide(team, team.well, byWell, false);
    const ctx = team.world.ctx(team.riskManager, later(team));
    await inTransaction(team.world.db, (tx) => removeLabels(ctx, tx, subject, ahead));
    expect((await logOf(byIll)).map(({ kind }) => kind)).toEqual(["decision", "removal"]);
    await replays();
  });

  test("a fold made ahead of fewer labels than go in the end is not adopted", async () => {
    const made = await Promise.all([one(), one()]);
    for (const on of made) await decide(team, team.ill, on, true);
    const { db } = team.world;
    const held = await readScorerInUse(db);
    const subject = { personId: team.ill.personId, from: null, to: null };
    // As where they labelled once more while their findings were looked for.
    const found = await findRemovals(db, spanOf(subject), held.logSeq - 1);
    const ahead = await foldAhead(db, held, found);
    const ctx = team.world.ctx(team.riskManager, later(team));
    await inTransaction(db, (tx) => removeLabels(ctx, tx, subject, ahead));
    await replays();
  });
});
