import { eq, inArray } from "drizzle-orm";
import { beforeEach, expect, test } from "vitest";
import { policies } from "@/db/schema/policies";
import { scorers } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { logitOf } from "@/lib/decibans";
import { newId } from "@/lib/new-id";
import { approvePolicy } from "@/lib/policy/approve";
import { declinePolicy } from "@/lib/policy/decline";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { readPolicy } from "@/lib/policy/overview";
import { proposePolicy } from "@/lib/policy/propose";
import { newestApproved, policyInForce } from "@/lib/policy/read";
import { DeclineInput, type PolicyTerms } from "@/lib/policy/schema";
import { applyPolicyInForce } from "@/lib/policy/take-effect";
import { withdrawPolicy } from "@/lib/policy/withdraw";
import { testWorld, WORLD_START } from "../support/world";

const world = await testWorld();
const supervisor = await world.person("supervisor");
const other = await world.person("supervisor");
const riskManager = await world.person("risk_manager");
const both = await world.person("supervisor", "risk_manager");

let minute = 0;
/** Each act a minute after the one before. */
const as = (actor: typeof supervisor) =>
  world.ctx(actor, new Date(WORLD_START.getTime() + ++minute * 60_000));
const clock = () => new Date(WORLD_START.getTime() + minute * 60_000);

let terms: PolicyTerms;
let version: number;
beforeEach(async () => {
  const newest = await newestApproved(world.db);
  version = newest.version;
  terms = { ...newest.terms, dailyCapacity: newest.terms.dailyCapacity + 1 };
});

const propose = (actor = supervisor, changed: Partial<PolicyTerms> = {}) =>
  proposePolicy(as(actor), {
    terms: { ...terms, ...changed },
    reason: "More people on the team",
    basedOnVersion: version,
  });
const approve = (actor: typeof supervisor, id: string, effectiveAt: string | null = null) =>
  approvePolicy(as(actor), { id, effectiveAt });

test("terms change only when a second person approves what the first one proposed", async () => {
  const proposal = await propose();
  expect(proposal).toMatchObject({
    state: "proposed",
    version: null,
    basedOnVersion: version,
    settledBy: null,
  });
  expect((await policyInForce(world.db, clock())).version).toBe(version);
  const approved = await approve(riskManager, proposal.policyId);
  expect(approved).toMatchObject({
    state: "approved",
    version: version + 1,
    proposedBy: { id: supervisor.personId, name: supervisor.name },
    settledBy: { id: riskManager.personId },
    effectiveAt: clock().toISOString(),
  });
  expect(await policyInForce(world.db, clock())).toMatchObject({ version: version + 1, terms });
  const acts = await world.db
    .select({ act: trail.act, facts: trail.facts, actorId: trail.actorId })
    .from(trail)
    .where(eq(trail.subjectId, proposal.policyId));
  expect(acts.map(({ act, actorId }) => [act, actorId])).toEqual([
    ["policy.proposed", supervisor.personId],
    ["policy.approved", riskManager.personId],
  ]);
  expect(JSON.parse(acts[0]?.facts ?? "")).toEqual({
    basedOnVersion: version,
    changes: [{ path: "dailyCapacity", from: terms.dailyCapacity - 1, to: terms.dailyCapacity }],
  });
});

test("nobody approves or declines their own proposal, whatever their roles or tabs", async () => {
  const proposal = await propose(both);
  const tabs = await Promise.allSettled([approve(both, proposal.policyId), approve(both, proposal.policyId)]);
  expect(tabs.map((tab) => tab.status === "rejected" && tab.reason.code)).toEqual(["forbidden", "forbidden"]);
  const refusal = { id: proposal.policyId, reason: "Not this month" };
  await expect(declinePolicy(as(both), refusal)).rejects.toMatchObject({
    code: "forbidden",
  });
  expect((await newestApproved(world.db)).version).toBe(version);
});

test("a key that acts for the proposer is the proposer", async () => {
  const proposal = await propose(both);
  const withKey = { ...both, key: { id: newId(), source: "ops", scopes: ["policy:write" as const] } };
  await expect(approve(withKey, proposal.policyId)).rejects.toMatchObject({ code: "forbidden" });
});

test("only the roles of the matrix propose and approve", async () => {
  const reviewer = await world.person("reviewer");
  const auditor = await world.person("auditor");
  await expect(propose(riskManager)).rejects.toMatchObject({ code: "forbidden" });
  await expect(propose(reviewer)).rejects.toMatchObject({ code: "forbidden" });
  const proposal = await propose();
  await expect(approve(auditor, proposal.policyId)).rejects.toMatchObject({ code: "forbidden" });
  await expect(approve(reviewer, proposal.policyId)).rejects.toMatchObject({ code: "forbidden" });
});

test("twenty approvals at once of one proposal make one version", async () => {
  const proposal = await propose();
  const all = await Promise.allSettled(
    Array.from({ length: 20 }, (_, i) => approve(i % 2 ? other : riskManager, proposal.policyId)),
  );
  expect(all.filter(({ status }) => status === "fulfilled")).toHaveLength(1);
  for (const one of all)
    if (one.status === "rejected") expect(one.reason).toMatchObject({ code: "conflict" });
  expect((await newestApproved(world.db)).version).toBe(version + 1);
});

test("two proposals against one version, approved at once, make one version; the other is stale", async () => {
  const first = await propose(supervisor);
  const second = await propose(other, { dailyCapacity: terms.dailyCapacity + 50 });
  const all = await Promise.allSettled([
    approve(riskManager, first.policyId),
    approve(both, second.policyId),
  ]);
  expect(all.map(({ status }) => status).sort()).toEqual(["fulfilled", "rejected"]);
  const refused = all.find((one) => one.status === "rejected");
  expect(refused?.reason).toMatchObject({ code: "conflict", status: 409 });
  expect((await newestApproved(world.db)).version).toBe(version + 1);
});

test("a proposal against a version that has been replaced is refused when made and when approved", async () => {
  const late = await propose(other, { dailyCapacity: terms.dailyCapacity + 7 });
  await approve(riskManager, (await propose()).policyId);
  await expect(approve(riskManager, late.policyId)).rejects.toMatchObject({ code: "conflict" });
  await expect(propose(other, { dailyCapacity: 1000 })).rejects.toMatchObject({ code: "conflict" });
  expect(await withdrawPolicy(as(other), { id: late.policyId })).toMatchObject({ state: "withdrawn" });
});

test("what is settled stays settled, and only its proposer withdraws a proposal", async () => {
  const declined = await propose();
  await expect(withdrawPolicy(as(other), { id: declined.policyId })).rejects.toMatchObject({
    code: "forbidden",
  });
  const { policyId } = declined;
  const refusal = { id: policyId, reason: "Too many alerts for one shift" };
  expect(await declinePolicy(as(other), refusal)).toMatchObject({
    state: "declined",
    version: null,
    refusalReason: refusal.reason,
  });
  await expect(approve(riskManager, policyId)).rejects.toMatchObject({ code: "conflict" });
  await expect(declinePolicy(as(other), refusal)).rejects.toMatchObject({ code: "conflict" });
  await expect(withdrawPolicy(as(supervisor), { id: policyId })).rejects.toMatchObject({ code: "conflict" });
  await expect(approve(riskManager, newId())).rejects.toMatchObject({ code: "not_found" });
});

test("a proposal is declined with a reason, which stays out of the trail", async () => {
  const { policyId } = await propose();
  const reason = "Ask again after the holidays";
  for (const nothing of ["", "  "]) {
    expect(DeclineInput.safeParse({ id: policyId, reason: nothing }).error?.issues[0]?.path).toEqual([
      "reason",
    ]);
  }
  await declinePolicy(as(other), { id: policyId, reason });
  const { history } = await readPolicy(as(supervisor));
  expect(history.find((record) => record.policyId === policyId)).toMatchObject({ refusalReason: reason });
  const entries = await world.db.select().from(trail).where(eq(trail.subjectId, policyId));
  expect(entries.map(({ act }) => act)).toContain("policy.declined");
  expect(JSON.stringify(entries.map(({ facts }) => facts))).not.toContain("holidays");
});

test("an earlier version's terms come back as a version of their own", async () => {
  const before = (await newestApproved(world.db)).terms;
  await approve(riskManager, (await propose()).policyId);
  const putBack = await proposePolicy(as(supervisor), {
    terms: before,
    reason: "The change flooded the desk",
    basedOnVersion: version + 1,
  });
  expect(await approve(other, putBack.policyId)).toMatchObject({ version: version + 2, terms: before });
});

test("terms that change nothing are refused", async () => {
  const { terms: same } = await newestApproved(world.db);
  await expect(
    proposePolicy(as(supervisor), { terms: same, reason: "None", basedOnVersion: version }),
  ).rejects.toMatchObject({ code: "invalid", errors: [{ path: "terms" }] });
});

test("a later moment is kept, the scorer's prior odds follow at that moment and not before, and only once", async () => {
  const baseRate = 0.002;
  const proposal = await propose(supervisor, { baseRate });
  await expect(approve(riskManager, proposal.policyId, "2026-03-01T00:00:00Z")).rejects.toMatchObject({
    errors: [{ path: "effectiveAt" }],
  });
  const effectiveAt = new Date(WORLD_START.getTime() + 86_400_000);
  await approve(riskManager, proposal.policyId, effectiveAt.toISOString());
  expect((await policyInForce(world.db, clock())).version).toBe(version);
  const job = (at: Date) => world.ctx({ kind: "system", job: "policy.takes-effect" }, at);
  await applyPolicyInForce(job(clock()));
  expect((await scorerInUse()).offset).toBe(logitOf(DEFAULT_TERMS.baseRate));
  await Promise.all([applyPolicyInForce(job(effectiveAt)), applyPolicyInForce(job(effectiveAt))]);
  await applyPolicyInForce(job(effectiveAt));
  expect((await policyInForce(world.db, effectiveAt)).version).toBe(version + 1);
  expect(await scorerInUse()).toEqual({ offset: logitOf(baseRate), retired: 1 });
});

test("a version approved now also ends one that waits for its moment", async () => {
  const tomorrow = new Date(clock().getTime() + 86_400_000);
  await approve(riskManager, (await propose()).policyId, tomorrow.toISOString());
  const next = await proposePolicy(as(supervisor), {
    terms: { ...terms, dailyCapacity: terms.dailyCapacity + 20 },
    reason: "Needed today",
    basedOnVersion: version + 1,
  });
  await approve(other, next.policyId);
  expect((await policyInForce(world.db, clock())).version).toBe(version + 2);
  expect((await policyInForce(world.db, tomorrow)).version).toBe(version + 2);
});

test("an approval that takes effect at once re-runs the scorer under the new prior odds", async () => {
  const { retired } = await scorerInUse();
  await approve(riskManager, (await propose(supervisor, { baseRate: 0.005 })).policyId);
  expect(await scorerInUse()).toEqual({ offset: logitOf(0.005), retired: retired + 1 });
});

async function scorerInUse() {
  const rows = await world.db
    .select()
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "retired"]));
  const inUse = rows.find(({ role }) => role === "in_use");
  return { offset: inUse?.options.offset, retired: rows.filter(({ role }) => role === "retired").length };
}

test("a version is never proposed without a number, nor numbered twice", async () => {
  const rows = await world.db.select({ version: policies.version, state: policies.state }).from(policies);
  const numbered = rows.filter((row) => row.version !== null);
  expect(new Set(numbered.map((row) => row.version)).size).toBe(numbered.length);
  expect(numbered.every(({ state }) => state === "approved")).toBe(true);
});
