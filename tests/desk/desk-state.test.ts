import { describe, expect, it } from "vitest";
import {
  type Act,
  type DeskEvent,
  type DeskState,
  deskReducer,
  EMPTY_DESK,
  previousCase,
  undoable,
} from "@/components/desk/desk-state";
import { caseOf } from "./case-view";

const deskAfter = (state: DeskState, ...events: DeskEvent[]) => events.reduce(deskReducer, state);
const served = (id: string): DeskEvent => ({ kind: "served", case: caseOf(id) });
const ids = (state: DeskState) => state.ready.map((one) => one.caseId);

const decision = (fields: Partial<Extract<Act, { kind: "decision" }>> = {}): Act => ({
  kind: "decision",
  finding: { verdict: "legitimate", confidence: "sure", typology: null },
  note: "",
  scoreWasHidden: false,
  together: [],
  ...fields,
});

describe("the case at the elbow", () => {
  it("comes to hand in the same moment as the one before is committed", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"), {
      kind: "committed",
      sentId: "1",
      act: decision(),
    });
    expect(ids(state)).toEqual(["b"]);
    expect(state.sent[0]).toMatchObject({ sentId: "1", state: "sending", case: { caseId: "a" } });
  });

  it("does not come to hand when it was decided together with the one before", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"), served("c"), {
      kind: "committed",
      sentId: "1",
      act: decision({ together: [{ caseId: "b" }, { transactionId: "t" }] }),
    });
    expect(ids(state)).toEqual(["c"]);
  });

  it("is not taken in twice when the server serves a case that is on the Desk already", () => {
    expect(ids(deskAfter(EMPTY_DESK, served("a"), served("a")))).toEqual(["a"]);
  });

  it("goes back when more than three are held, as after the page was loaded anew", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"), served("c"), served("d"));
    expect(ids(state)).toEqual(["a", "b", "c"]);
    expect(state.toRelease).toEqual(["d"]);
  });
});

describe("a refused act", () => {
  const sent = deskAfter(
    EMPTY_DESK,
    served("a"),
    served("b"),
    { kind: "note_typed", caseId: "a", note: "called twice" },
    { kind: "committed", sentId: "1", act: decision({ note: "called twice" }) },
  );

  it("brings the case back in front, with its note, where it is still this person's", () => {
    const fresh = caseOf("a", { revision: 4 });
    const state = deskAfter(sent, { kind: "refused", sentId: "1", problem: "changed", stillMine: fresh });
    expect(ids(state)).toEqual(["a", "b"]);
    expect(state.ready[0]?.revision).toBe(4);
    expect(state.notes.a).toBe("called twice");
    expect(state.sent[0]).toMatchObject({ state: "refused", problem: "changed" });
  });

  it("leaves the next case in hand and keeps the note where somebody else has the case", () => {
    const state = deskAfter(sent, { kind: "refused", sentId: "1", problem: "decided", stillMine: null });
    expect(ids(state)).toEqual(["b"]);
    expect(state.sent[0]?.act.note).toBe("called twice");
    expect(deskAfter(state, { kind: "dismissed", sentId: "1" }).sent).toEqual([]);
  });

  it("is seen to once a later act on the same case is accepted", () => {
    const state = deskAfter(
      sent,
      { kind: "refused", sentId: "1", problem: "no answer", stillMine: caseOf("a") },
      { kind: "committed", sentId: "2", act: decision({ note: "called twice" }) },
      { kind: "accepted", sentId: "2", undoUntil: "2026-03-02T09:20:00.000Z" },
    );
    expect(state.sent.map(({ sentId, state: now }) => [sentId, now])).toEqual([["2", "done"]]);
    expect(state.notes.a).toBeUndefined();
  });

  it("gives a claim back rather than hold more than three", () => {
    const full = deskAfter(sent, served("c"), served("d"));
    const state = deskAfter(full, {
      kind: "refused",
      sentId: "1",
      problem: "changed",
      stillMine: caseOf("a"),
    });
    expect(ids(state)).toEqual(["a", "b", "c"]);
    expect(state.toRelease).toEqual(["d"]);
  });
});

describe("putting a case back", () => {
  it("takes the next one, gives the claim back and asks not to be served it at once again", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"), { kind: "put_back" });
    expect(ids(state)).toEqual(["b"]);
    expect(state.toRelease).toEqual(["a"]);
    expect(state.putBack).toEqual(["a"]);
    expect(previousCase(state)).toBe("a");
  });

  it("allows it again once nothing else is left", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), { kind: "put_back" }, { kind: "ran_dry" });
    expect(state).toMatchObject({ dry: true, putBack: [] });
  });

  it("keeps the claim of a case that is taken in hand again before it was given back", () => {
    const state = deskAfter(
      EMPTY_DESK,
      served("a"),
      served("b"),
      { kind: "put_back" },
      {
        kind: "taken_in_hand",
        case: caseOf("a"),
      },
    );
    expect(ids(state)).toEqual(["a", "b"]);
    expect(state.toRelease).toEqual([]);
    expect(state.putBack).toEqual([]);
  });
});

describe("notes", () => {
  it("that the server kept are restored, unless something newer was typed here", () => {
    const kept: DeskEvent = { kind: "served", case: caseOf("a", { draft: "half a wor" }) };
    expect(deskAfter(EMPTY_DESK, kept).notes.a).toBe("half a wor");
    const typed = deskAfter(EMPTY_DESK, { kind: "note_typed", caseId: "a", note: "half a word" }, kept);
    expect(typed.notes.a).toBe("half a word");
  });
});

describe("taking back", () => {
  const until = "2026-03-02T09:20:00.000Z";
  const decided = deskAfter(EMPTY_DESK, served("a"), served("b"), {
    kind: "committed",
    sentId: "1",
    act: decision(),
  });
  const accepted = deskAfter(decided, { kind: "accepted", sentId: "1", undoUntil: until });

  it("is possible until the grace period ends", () => {
    expect(undoable(accepted, Date.parse(until) - 1)?.sentId).toBe("1");
    expect(undoable(accepted, Date.parse(until))).toBeNull();
  });

  it("waits for a decision that is still on its way rather than name the one before it", () => {
    expect(undoable(decided, 0)).toBeNull();
    expect(undoable(deskAfter(accepted, { kind: "committed", sentId: "2", act: decision() }), 0)).toBeNull();
  });

  it("passes over what was refused, and knows no decision that was taken back", () => {
    const refused = deskAfter(
      accepted,
      { kind: "committed", sentId: "2", act: decision() },
      { kind: "refused", sentId: "2", problem: "changed", stillMine: null },
    );
    expect(undoable(refused, 0)?.sentId).toBe("1");
    expect(undoable(deskAfter(accepted, { kind: "undone", sentId: "1" }), 0)).toBeNull();
  });

  it("is not offered for an escalation", () => {
    const escalated = deskAfter(
      EMPTY_DESK,
      served("a"),
      { kind: "committed", sentId: "1", act: { kind: "escalation", note: "unclear" } },
      { kind: "accepted", sentId: "1", undoUntil: null },
    );
    expect(undoable(escalated, 0)).toBeNull();
  });
});

describe("what the server says meanwhile", () => {
  it("renews a lease in place, without touching the order", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"), {
      kind: "renewed",
      state: { caseId: "b", state: "claimed", revision: 9, claimExpiresAt: "2026-03-02T09:30:00.000Z" },
    });
    expect(ids(state)).toEqual(["a", "b"]);
    expect(state.ready[1]).toMatchObject({ revision: 9, claimExpiresAt: "2026-03-02T09:30:00.000Z" });
  });

  it("drops a lost case from the elbow, and leaves one in hand before the person as no longer theirs", () => {
    const state = deskAfter(EMPTY_DESK, served("a"), served("b"));
    expect(ids(deskAfter(state, { kind: "lost", caseId: "b" }))).toEqual(["a"]);
    const inHand = deskAfter(state, { kind: "lost", caseId: "a" });
    expect(ids(inHand)).toEqual(["a", "b"]);
    expect(inHand.ready[0]?.mine).toBe(false);
    const taken = deskAfter(state, { kind: "read_again", case: caseOf("b", { mine: false }) });
    expect(ids(taken)).toEqual(["a"]);
  });

  it("ignores news of a case that has left the Desk", () => {
    const state = deskAfter(EMPTY_DESK, served("a"));
    expect(deskAfter(state, { kind: "read_again", case: caseOf("z") }).ready).toEqual(state.ready);
  });
});
