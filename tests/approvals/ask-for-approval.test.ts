import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { outbox } from "@/db/schema/mail";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import { askForSecondPerson } from "@/lib/approvals/ask-for-approval";
import type { ApprovalKind, ApprovalSubject } from "@/lib/approvals/codes";
import { propose } from "@/lib/approvals/propose";
import { refuseProposal } from "@/lib/approvals/refuse";
import { newId } from "@/lib/new-id";
import { testWorld } from "../support/world";

const world = await testWorld();
const { db } = world;
const proposer = await world.person("supervisor");
const supervisor = await world.person("supervisor");
const riskManager = await world.person("risk_manager");
await world.person("reviewer");
await world.person("auditor");
const job = world.ctx({ kind: "system", job: "approvals.mail" });
const ask = () => askForSecondPerson(job, { appUrl: "https://desk.example" });
const wish = (kind: ApprovalKind, subject: ApprovalSubject) => {
  const ctx = world.ctx(proposer);
  return inTransaction(db, (tx) => propose(ctx, tx, { kind, subject, reason: "It lost <less>" }));
};
const askedAbout = async (approvalId: string) => {
  const rows = await db
    .select({ facts: trail.facts, act: trail.act })
    .from(trail)
    .where(eq(trail.subjectId, approvalId));
  return rows.flatMap(({ act, facts }) => (act === "approval.asked" ? JSON.parse(facts).people : []));
};

test("whoever may settle it is asked once; its proposer is not", async () => {
  await ask();
  expect(await db.select().from(outbox)).toEqual([]);
  const { approvalId } = await wish("scorer.promote", { scorerId: newId() });
  await Promise.all([ask(), ask(), ask()]);
  await ask();
  const mails = await db.select().from(outbox);
  expect(mails.map(({ personId }) => personId).sort()).toEqual(
    [supervisor.personId, riskManager.personId].sort(),
  );
  for (const mail of mails) {
    expect(mail).toMatchObject({ kind: "approval_wanted", state: "queued" });
    expect(mail.text).toContain(`${proposer.name} proposes to put a candidate in the place`);
    expect(mail.text).toContain("https://desk.example/learning");
    expect(mail.html).toContain("It lost &lt;less&gt;");
  }
  expect((await askedAbout(approvalId)).sort()).toEqual([supervisor.personId, riskManager.personId].sort());
  await refuseProposal(world.ctx(riskManager), { id: approvalId, reason: "Not yet" });
});

test("the one whose labels should go is not asked, nor is anybody about what is settled", async () => {
  const settled = await wish("scorer.promote", { scorerId: newId() });
  await refuseProposal(world.ctx(riskManager), { id: settled.approvalId, reason: "Not yet" });
  const waiting = await wish("labels.remove", { personId: supervisor.personId, from: null, to: null });
  await ask();
  expect(await askedAbout(settled.approvalId)).toEqual([]);
  expect(await askedAbout(waiting.approvalId)).toEqual([riskManager.personId]);
});
