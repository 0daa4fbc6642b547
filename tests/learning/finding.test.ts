import { describe, expect, test } from "vitest";
import { type FindingRow, findingThatHolds, GivenLabelsByPerson } from "@/lib/learning/finding";

let seq = 0;
const row = (kind: FindingRow["kind"], label: FindingRow["label"], personId: string | null): FindingRow => {
  seq += 1;
  return {
    seq,
    kind,
    label,
    personId,
    transactionId: "payment",
    caseId: "case",
    decisionId: kind === "outcome" ? null : `decision-${seq}`,
    outcomeId: kind === "outcome" ? `outcome-${seq}` : null,
    at: new Date(seq * 1000),
  };
};
const undoOf = (decision: FindingRow): FindingRow => ({
  ...row("undo", 0, decision.personId),
  decisionId: decision.decisionId,
});

describe("the finding that holds at a place", () => {
  const ann = row("decision", 1, "ann");
  const ben = row("correction", -1, "ben");
  const chargeback = row("outcome", 1, null);

  test("is the last one", () => {
    expect(findingThatHolds([])).toBeNull();
    expect(findingThatHolds([ann, ben])).toBe(ben);
    expect(findingThatHolds([ann, ben, chargeback])).toBe(chargeback);
  });

  test("is the one before where the last was undone", () => {
    expect(findingThatHolds([ann, undoOf(ann)])).toBeNull();
    expect(findingThatHolds([chargeback, ben, undoOf(ben)])).toBe(chargeback);
  });

  test("is another's where one person's are left out, whoever came last", () => {
    expect(findingThatHolds([ann, ben], "ben")).toBe(ann);
    expect(findingThatHolds([ann, ben], "ann")).toBe(ben);
    expect(findingThatHolds([ann], "ann")).toBeNull();
    // Nothing comes back that had been undone.
    expect(findingThatHolds([ann, undoOf(ann), chargeback], "ann")).toBe(chargeback);
    expect(findingThatHolds([ann, undoOf(ann)], "ben")).toBeNull();
  });

  test("forgets what was removed before, and believes the same person again from then on", () => {
    const removalOfBen = row("removal", 1, "ben");
    const benAgain = row("correction", -1, "ben");
    expect(findingThatHolds([ann, ben, removalOfBen])).toBe(ann);
    expect(findingThatHolds([ann, ben, removalOfBen], "ann")).toBeNull();
    expect(findingThatHolds([ann, ben, removalOfBen, benAgain])).toBe(benAgain);
    expect(findingThatHolds([ann, ben, removalOfBen, benAgain], "ben")).toBe(ann);
  });

  test("may be that there is no label: a customer's own misuse is a finding too", () => {
    const misuse = row("correction", 0, "ben");
    expect(findingThatHolds([ann, misuse])).toBe(misuse);
    expect(findingThatHolds([ann, misuse], "ben")).toBe(ann);
  });
});

describe("what became of a person's labels", () => {
  const countsOf = (personId: string, ...places: FindingRow[][]) => {
    const people = new GivenLabelsByPerson();
    for (const rows of places) people.addPlace(rows);
    return new Map(people.entries()).get(personId);
  };

  test("counts those in force, those given, corrected by another and overturned by an outcome", () => {
    const kept = [row("decision", 1, "ann")];
    const corrected = [row("decision", 1, "ann"), row("correction", -1, "ben")];
    const overturned = [row("decision", -1, "ann"), row("outcome", 1, null)];
    const agreed = [row("decision", 1, "ann"), row("adjudication", 1, "cleo")];
    expect(countsOf("ann", kept, corrected, overturned, agreed)).toMatchObject({
      labels: 1,
      fraudulent: 1,
      given: 4,
      corrected: 1,
      overturned: 1,
    });
    expect(countsOf("ben", kept, corrected)).toMatchObject({
      labels: 1,
      fraudulent: 0,
      given: 1,
      corrected: 0,
    });
  });

  test("leaves out what they took back themselves", () => {
    const decision = row("decision", 1, "ann");
    expect(countsOf("ann", [decision, undoOf(decision)])).toBeUndefined();
  });

  test("does not hold a correction against them that was itself taken out", () => {
    const place = [row("decision", 1, "ann"), row("correction", -1, "ben"), row("removal", 1, "ben")];
    expect(countsOf("ann", place)).toMatchObject({ labels: 1, given: 1, corrected: 0 });
    expect(countsOf("ben", place)).toMatchObject({ labels: 0, given: 1 });
  });
});
