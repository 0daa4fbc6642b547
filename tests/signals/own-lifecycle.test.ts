import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { ownSignals } from "@/db/schema/learning";
import { approveProposal } from "@/lib/approvals/approve";
import { showScorer } from "@/lib/learning/show-scorer";
import { archiveSignal } from "@/lib/signals/archive-own";
import { changeSignal } from "@/lib/signals/change-own";
import { draftSignal } from "@/lib/signals/draft-own";
import { previewSignal } from "@/lib/signals/preview-own";
import { listSignals } from "@/lib/signals/read-signals";
import { testWorld } from "../support/world";
import { LOYALTY, Office } from "./own-signal";

let office: Office;
beforeAll(async () => {
  office = await Office.open(await testWorld());
  const waiting = await office.cases(40, 3);
  await office.label(waiting.slice(0, 20));
}, 120_000);

describe("defining", () => {
  test("a draft is listed with what it reads and counts for nothing", async () => {
    const draft = await office.draft({ name: "Loyal, and large!" });
    expect(draft).toMatchObject({ key: "own_loyal_and_large", state: "draft", weight: null, mayEdit: true });
    expect(draft.needs).toEqual(["attributes.loyalty_years"]);
    const { own, catalogue, signalSetVersion } = await listSignals(office.as(office.second));
    expect(own.map(({ signalId }) => signalId)).toContain(draft.signalId);
    expect(signalSetVersion).toBe(1);
    expect(catalogue.every(({ weights, formulas }) => weights.length === formulas.length)).toBe(true);
  });

  test("a bad formula is refused with its place, and a name that is taken", async () => {
    await expect(office.draft({ name: "Bad", formula: "amount + eval(1)" })).rejects.toMatchObject({
      errors: [{ path: "formula", message: expect.stringMatching(/no function eval.*character 10/) }],
    });
    await expect(office.draft({ name: "Old", formula: "attributes.age" })).rejects.toMatchObject({
      errors: [{ path: "formula", message: expect.stringMatching(/never a signal/) }],
    });
    await office.draft({ name: "Twice" });
    await expect(office.draft({ name: "twice" })).rejects.toMatchObject({ code: "rule_broken" });
  });

  test("only supervisors define, and only those who read scorers see", async () => {
    for (const role of ["reviewer", "risk_manager", "auditor", "administrator"] as const) {
      const actor = await office.world.person(role);
      await expect(draftSignal(office.as(actor), LOYALTY)).rejects.toMatchObject({ code: "forbidden" });
      await expect(previewSignal(office.as(actor), { formula: "1" })).rejects.toMatchObject({
        code: "forbidden",
      });
    }
    await expect(listSignals(office.as(office.reviewer))).rejects.toMatchObject({ code: "forbidden" });
  });

  test("a draft changes by the revision that was seen, until it is proposed", async () => {
    const { signalId, revision } = await office.draft({ name: "Changing" });
    const change = { ...LOYALTY, id: signalId, name: "Changed", formula: "hour > 22" };
    const changed = await changeSignal(office.as(office.supervisor), { ...change, revision });
    expect(changed).toMatchObject({ name: "Changed", formula: "hour > 22", revision: revision + 1 });
    await expect(changeSignal(office.as(office.supervisor), { ...change, revision })).rejects.toMatchObject({
      code: "conflict",
    });
    await office.propose(signalId, "on");
    await expect(
      changeSignal(office.as(office.supervisor), { ...change, revision: revision + 1 }),
    ).rejects.toThrow(/waits for a second person/);
    await expect(
      archiveSignal(office.as(office.supervisor), { id: signalId, revision: revision + 1 }),
    ).rejects.toThrow(/waits for a second person/);
    await expect(office.propose(signalId, "on")).rejects.toMatchObject({ code: "conflict" });
  });
});

describe("switching", () => {
  test("takes two persons, fixes the formula for good, and shows the weight", async () => {
    const { signalId, revision } = await office.draft({ name: "Switched" });
    const { approvalId } = await office.propose(signalId, "on");
    await expect(approveProposal(office.as(office.supervisor), { id: approvalId })).rejects.toMatchObject({
      code: "forbidden",
    });
    await approveProposal(office.as(office.second), { id: approvalId });
    const [on] = (await listSignals(office.as(office.second))).own.filter((one) => one.signalId === signalId);
    expect(on).toMatchObject({ state: "on", mayEdit: false, waiting: null, weight: expect.any(Number) });
    const shown = await showScorer(office.as(office.second));
    expect(shown.signals.at(-1)).toEqual({ key: "own_switched", name: "Switched", weights: [on?.weight] });
    await expect(
      changeSignal(office.as(office.supervisor), {
        ...LOYALTY,
        id: signalId,
        name: "X",
        revision: revision + 1,
      }),
    ).rejects.toThrow(/scores rest on its formula/);
    await expect(
      archiveSignal(office.as(office.supervisor), { id: signalId, revision: revision + 1 }),
    ).rejects.toThrow(/switch it off first/);
    await office.switch(signalId, "off");
    await archiveSignal(office.as(office.supervisor), { id: signalId, revision: revision + 2 });
    expect((await listSignals(office.as(office.second))).own.map((one) => one.signalId)).not.toContain(
      signalId,
    );
    await expect(office.propose(signalId, "on")).rejects.toThrow(/archived/);
  });

  test("there is room for twenty-four, and archived drafts give theirs back", async () => {
    const { room } = await listSignals(office.as(office.second));
    const drafts = [];
    for (let n = 0; n < room; n++)
      drafts.push(await office.draft({ name: `Filling ${n}`, formula: String(n) }));
    await expect(office.draft({ name: "One too many" })).rejects.toMatchObject({ code: "rule_broken" });
    for (const { signalId, revision } of drafts)
      await archiveSignal(office.as(office.supervisor), { id: signalId, revision });
    expect((await listSignals(office.as(office.second))).room).toBe(room);
  });

  test("the database itself refuses a signal that is on without a place", async () => {
    const { signalId } = await office.draft({ name: "Placeless" });
    await expect(
      office.world.db.update(ownSignals).set({ state: "on" }).where(eq(ownSignals.id, signalId)),
    ).rejects.toThrow();
  });
});

describe("the preview", () => {
  test("says what the formula measures on the newest payments, and suggests a scale", async () => {
    const { figures, problem, needs } = await previewSignal(office.as(office.supervisor), {
      formula: "attributes.loyalty_years",
    });
    expect(problem).toBeNull();
    expect(needs).toEqual(["attributes.loyalty_years"]);
    expect(figures).toMatchObject({ payments: 40, available: 35, values: { min: 0, max: 5 } });
    expect(figures?.samples).toHaveLength(5);
    expect(figures?.histogram.reduce((sum, count) => sum + count, 0)).toBe(35);
    expect(figures?.labelled?.fraudulent.count).toBeGreaterThan(0);
    const { labelled } = figures ?? {};
    expect(labelled?.difference).toBeCloseTo(
      (labelled?.fraudulent.mean ?? 0) - (labelled?.legitimate.mean ?? 0),
      12,
    );
  });

  test("says where a formula is wrong", async () => {
    const answer = await previewSignal(office.as(office.supervisor), { formula: "amount > > 3" });
    expect(answer).toMatchObject({ figures: null, problem: { at: 9, message: expect.any(String) } });
  });

  test("says that nothing is available rather than fail", async () => {
    const { figures } = await previewSignal(office.as(office.supervisor), {
      formula: "attributes.never_sent",
    });
    expect(figures).toMatchObject({
      available: 0,
      values: null,
      suggested: null,
      labelled: null,
      histogram: [],
    });
  });
});
