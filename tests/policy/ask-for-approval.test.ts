import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { outbox } from "@/db/schema/mail";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { approvePolicy } from "@/lib/policy/approve";
import { askForApproval } from "@/lib/policy/ask-for-approval";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { proposePolicy } from "@/lib/policy/propose";
import { testWorld } from "../support/world";

const world = await testWorld();
const { db } = world;
const proposer = await world.person("supervisor", "risk_manager");
const supervisor = await world.person("supervisor", "risk_manager");
const riskManager = await world.person("risk_manager");
const gone = await world.person("supervisor");
await world.person("reviewer");
await world.person("auditor");
await db.update(people).set({ state: "deactivated" }).where(eq(people.id, gone.personId));
const job = world.ctx({ kind: "system", job: "policy.approval-mail" });
const ask = () => askForApproval(job, { appUrl: "https://desk.example" });

test("those who may approve are asked once, the proposer and people who left are not", async () => {
  await ask();
  expect(await db.select().from(outbox)).toEqual([]);
  const reason = "A hold less <often>";
  const proposal = await proposePolicy(world.ctx(proposer), {
    terms: { ...DEFAULT_TERMS, holdThreshold: 0.9, dailyCapacity: 200 },
    reason,
    basedOnVersion: 1,
  });
  await Promise.all([ask(), ask(), ask()]);
  await ask();
  const mails = await db.select().from(outbox);
  expect(mails.map(({ personId }) => personId).sort()).toEqual(
    [supervisor.personId, riskManager.personId].sort(),
  );
  for (const mail of mails) {
    expect(mail).toMatchObject({
      kind: "approval_wanted",
      state: "queued",
      subject: "A policy change waits for approval",
    });
    expect(mail.recipient).toBe(`${mail.personId}@example.test`);
    expect(mail.text).toContain(`${proposer.name} proposes to change 2 terms`);
    expect(mail.text).toContain(reason);
    expect(mail.text).toContain("https://desk.example/policy");
    expect(mail.html).toContain("A hold less &lt;often&gt;");
  }
  const entries = await db
    .select({ facts: trail.facts })
    .from(trail)
    .where(eq(trail.act, "policy.approval_asked"));
  const asked = entries.flatMap(({ facts }) => JSON.parse(facts).people);
  expect(asked.sort()).toEqual([supervisor.personId, riskManager.personId].sort());
  await approvePolicy(world.ctx(riskManager), { id: proposal.policyId, effectiveAt: null });
});

test("nobody is asked about what can no longer be approved", async () => {
  const terms = { ...DEFAULT_TERMS, holdThreshold: 0.9, dailyCapacity: 200 };
  const propose = (dailyCapacity: number) =>
    proposePolicy(world.ctx(supervisor), {
      terms: { ...terms, dailyCapacity },
      reason: "More",
      basedOnVersion: 2,
    });
  const [stale, chosen] = [await propose(300), await propose(400)];
  await approvePolicy(world.ctx(riskManager), { id: chosen.policyId, effectiveAt: null });
  await ask();
  const keys = (await db.select({ key: outbox.dedupeKey }).from(outbox)).map(({ key }) => key);
  expect(keys).toHaveLength(2);
  expect(keys.some((key) => key.includes(stale.policyId))).toBe(false);
});
