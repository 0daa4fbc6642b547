import { asc, eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { approvals } from "@/db/schema/approvals";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import { approveProposal } from "@/lib/approvals/approve";
import type { ApprovalKind, ApprovalSubject } from "@/lib/approvals/codes";
import { propose } from "@/lib/approvals/propose";
import { listApprovals } from "@/lib/approvals/read";
import { refuseProposal } from "@/lib/approvals/refuse";
import { withdrawProposal } from "@/lib/approvals/withdraw";
import type { PersonActor } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { testWorld } from "../support/world";

const world = await testWorld();
const supervisor = await world.person("supervisor");
const other = await world.person("supervisor");
const riskManager = await world.person("risk_manager");
const reviewer = await world.person("reviewer");

const wish = (
  by: PersonActor,
  subject: ApprovalSubject = { scorerId: newId() },
  kind: ApprovalKind = "scorer.promote",
) => {
  const ctx = world.ctx(by);
  return inTransaction(world.db, (tx) => propose(ctx, tx, { kind, subject, reason: "It lost less" }));
};

const trailOf = (approvalId: string) =>
  world.db
    .select({ act: trail.act, actorId: trail.actorId })
    .from(trail)
    .where(eq(trail.subjectId, approvalId))
    .orderBy(asc(trail.seq));

test("a wish waits with its author, its reason and what it is about", async () => {
  const subject = { scorerId: newId() };
  const approval = await wish(supervisor, subject);
  expect(approval).toMatchObject({
    kind: "scorer.promote",
    subject,
    state: "waiting",
    reason: "It lost less",
    proposedBy: { id: supervisor.personId, name: supervisor.name },
    settledBy: null,
    settledAt: null,
  });
  const { items } = await listApprovals(world.ctx(riskManager), { state: "waiting" });
  expect(items).toContainEqual(approval);
  expect((await listApprovals(world.ctx(riskManager), { state: "refused" })).items).toEqual([]);
});

test("only a supervisor proposes, and a reviewer does not even read", async () => {
  await expect(wish(riskManager)).rejects.toMatchObject({ code: "forbidden" });
  await expect(wish(reviewer)).rejects.toMatchObject({ code: "forbidden" });
  await expect(listApprovals(world.ctx(reviewer), {})).rejects.toMatchObject({ code: "forbidden" });
});

test("who proposed neither approves nor refuses, and nobody else withdraws", async () => {
  const { approvalId: id } = await wish(supervisor);
  await expect(approveProposal(world.ctx(supervisor), { id })).rejects.toMatchObject({ code: "forbidden" });
  await expect(refuseProposal(world.ctx(supervisor), { id, reason: "No" })).rejects.toMatchObject({
    code: "forbidden",
  });
  await expect(withdrawProposal(world.ctx(other), { id })).rejects.toMatchObject({ code: "forbidden" });
  expect(await withdrawProposal(world.ctx(supervisor), { id })).toMatchObject({ state: "withdrawn" });
  expect(await trailOf(id)).toEqual([
    { act: "approval.proposed", actorId: supervisor.personId },
    { act: "approval.withdrawn", actorId: supervisor.personId },
  ]);
});

test("the database itself refuses an approval by the proposer", async () => {
  const { approvalId } = await wish(supervisor);
  await expect(
    world.db
      .update(approvals)
      .set({ state: "approved", settledBy: supervisor.personId, settledAt: new Date() })
      .where(eq(approvals.id, approvalId)),
  ).rejects.toMatchObject({ cause: { errno: 4025 } });
});

test("the same thing is proposed once at a time, however many ask at once", async () => {
  const subject = { scorerId: newId() };
  const all = await Promise.allSettled([
    wish(supervisor, subject),
    wish(other, subject),
    wish(other, subject),
    wish(supervisor, subject),
  ]);
  expect(all.filter(({ status }) => status === "fulfilled")).toHaveLength(1);
  for (const one of all)
    if (one.status === "rejected") expect(one.reason).toMatchObject({ code: "conflict", status: 409 });
  const { items } = await listApprovals(world.ctx(supervisor), { state: "waiting" });
  const [waiting] = items.filter((item) => JSON.stringify(item.subject) === JSON.stringify(subject));
  const settled = await refuseProposal(world.ctx(riskManager), {
    id: waiting?.approvalId ?? "",
    reason: "Too few labels yet",
  });
  expect(settled).toMatchObject({ state: "refused", settledReason: "Too few labels yet" });
  expect(await wish(supervisor, subject)).toMatchObject({ state: "waiting" });
});

test("what is settled stays settled", async () => {
  const { approvalId: id } = await wish(supervisor);
  await refuseProposal(world.ctx(other), { id, reason: "Not now" });
  await expect(approveProposal(world.ctx(other), { id })).rejects.toMatchObject({ code: "conflict" });
  await expect(withdrawProposal(world.ctx(supervisor), { id })).rejects.toMatchObject({ code: "conflict" });
  await expect(refuseProposal(world.ctx(other), { id: newId(), reason: "?" })).rejects.toMatchObject({
    code: "not_found",
  });
});

test("of two who settle at once, one does it and the other hears so", async () => {
  const { approvalId: id } = await wish(supervisor);
  const all = await Promise.allSettled([
    refuseProposal(world.ctx(other), { id, reason: "No" }),
    refuseProposal(world.ctx(riskManager), { id, reason: "No" }),
  ]);
  expect(all.map(({ status }) => status).sort()).toEqual(["fulfilled", "rejected"]);
  expect(await trailOf(id)).toHaveLength(2);
});

test("who gave the labels neither proposes, approves nor refuses their removal", async () => {
  const subject = { personId: supervisor.personId, from: null, to: null };
  await expect(wish(supervisor, subject, "labels.remove")).rejects.toMatchObject({ code: "forbidden" });
  const { approvalId: id } = await wish(other, subject, "labels.remove");
  await expect(approveProposal(world.ctx(supervisor), { id })).rejects.toMatchObject({ code: "forbidden" });
  await expect(refuseProposal(world.ctx(supervisor), { id, reason: "No" })).rejects.toMatchObject({
    code: "forbidden",
  });
});
