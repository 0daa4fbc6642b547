import { describe, expect, test } from "vitest";
import type { Role } from "@/lib/auth/codes";
import { CASE_STATES } from "@/lib/cases/codes";
import {
  type Asker,
  assign,
  type CaseChange,
  type CaseStanding,
  claim,
  escalate,
  holderOf,
  isTakeable,
  release,
  setWaiting,
  whatTimeBrings,
} from "@/lib/cases/rules";
import { maySee } from "@/lib/cases/visibility";
import { KnownError } from "@/lib/errors";

const NOW = new Date("2026-05-04T10:00:00Z");
const minutes = (count: number) => new Date(NOW.getTime() + count * 60_000);
const asker = (personId: string, ...roles: Role[]): Asker => ({ personId, roles });
const mira = asker("mira", "reviewer");
const supervisor = asker("sol", "supervisor");

/** A case in every situation that the acts tell apart. */
const SITUATIONS = {
  open: {},
  "open, assigned to Mira": { assignedTo: "mira" },
  "open, assigned to Tove": { assignedTo: "tove" },
  "claimed by Mira": { state: "claimed", claimedBy: "mira", claimExpiresAt: minutes(5) },
  "claimed by Tove": { state: "claimed", claimedBy: "tove", claimExpiresAt: minutes(5) },
  "claimed by Tove, lease over": { state: "claimed", claimedBy: "tove", claimExpiresAt: minutes(-1) },
  "waiting, Mira's": { state: "waiting", assignedTo: "mira", waitUntil: minutes(60) },
  "waiting, Tove's": { state: "waiting", assignedTo: "tove", waitUntil: minutes(60) },
  escalated: { state: "escalated", escalatedAt: minutes(-30) },
  "escalated, claimed by Sol": {
    state: "claimed",
    claimedBy: "sol",
    claimExpiresAt: minutes(5),
    escalatedAt: minutes(-30),
  },
  decided: { state: "decided" },
  lapsed: { state: "lapsed" },
} as const satisfies Record<string, Partial<CaseStanding>>;
type Situation = keyof typeof SITUATIONS;

const standing = (situation: Situation): CaseStanding => ({
  state: "open",
  assignedTo: null,
  claimedBy: null,
  claimExpiresAt: null,
  waitUntil: null,
  escalatedAt: null,
  ...SITUATIONS[situation],
});

/** The state an act leads to, or the code it is refused with. */
function outcome(situation: Situation, act: (row: CaseStanding) => CaseChange | null): string {
  const row = standing(situation);
  try {
    const change = act(row);
    return change === null ? "nothing" : (change.state ?? row.state);
  } catch (error) {
    if (error instanceof KnownError) return error.code;
    throw error;
  }
}

const ACTS = {
  "Mira claims": (row) => claim(row, mira, NOW),
  "a supervisor claims": (row) => claim(row, supervisor, NOW),
  "Mira releases": (row) => release(row, mira),
  "a supervisor releases": (row) => release(row, supervisor),
  "Mira escalates": (row) => escalate(row, mira, NOW),
  "Mira sets it aside": (row) => setWaiting(row, mira, minutes(30), null, NOW),
  "it is assigned to Mira": (row) => assign(row, mira, NOW),
  "it is assigned to nobody": (row) => assign(row, null, NOW),
  "time passes": (row) => whatTimeBrings(row, NOW),
} as const satisfies Record<string, (row: CaseStanding) => CaseChange | null>;
type Act = keyof typeof ACTS;

/** What each act makes of a case, or the code it is refused with; columns in the order of the acts. */
const TABLE: Record<Situation, string> = {
  open: "claimed claimed conflict conflict conflict conflict open open nothing",
  "open, assigned to Mira": "claimed claimed conflict conflict conflict conflict open open nothing",
  "open, assigned to Tove": "forbidden claimed conflict conflict conflict conflict open open nothing",
  "claimed by Mira": "claimed conflict open open escalated waiting claimed open nothing",
  "claimed by Tove": "conflict conflict conflict open conflict conflict open open nothing",
  "claimed by Tove, lease over": "claimed claimed conflict open conflict conflict open open open",
  "waiting, Mira's": "claimed claimed conflict conflict conflict conflict waiting waiting nothing",
  "waiting, Tove's": "forbidden claimed conflict conflict conflict conflict waiting waiting nothing",
  escalated: "forbidden claimed conflict conflict conflict conflict open escalated nothing",
  "escalated, claimed by Sol": "conflict claimed conflict escalated conflict conflict open escalated nothing",
  decided: "conflict conflict conflict conflict conflict conflict conflict conflict nothing",
  lapsed: "conflict conflict conflict conflict conflict conflict conflict conflict nothing",
};

describe.each(Object.entries(TABLE) as [Situation, string][])("a case that is %s", (situation, row) => {
  const acts = Object.keys(ACTS) as Act[];
  test.each(row.split(" ").map((wanted, column) => [acts[column] as Act, wanted] as const))(
    "when %s: %s",
    (act, wanted) => {
      expect(outcome(situation, ACTS[act])).toBe(wanted);
    },
  );
});

test("the table answers for every act in every situation", () => {
  expect(Object.keys(TABLE)).toEqual(Object.keys(SITUATIONS));
  for (const row of Object.values(TABLE)) expect(row.split(" ")).toHaveLength(Object.keys(ACTS).length);
});

test("every state of a case is among the situations", () => {
  const states = new Set(Object.keys(SITUATIONS).map((situation) => standing(situation as Situation).state));
  expect([...states].sort()).toEqual([...CASE_STATES].sort());
});

test("no act leaves a holder on a case that is not claimed, or a claimed case without one", () => {
  for (const act of Object.values(ACTS)) {
    for (const situation of Object.keys(SITUATIONS) as Situation[]) {
      let change: CaseChange | null = null;
      try {
        change = act(standing(situation));
      } catch (error) {
        if (!(error instanceof KnownError)) throw error;
      }
      const after = { ...standing(situation), ...change };
      expect([situation, after.state === "claimed"]).toEqual([situation, after.claimedBy !== null]);
    }
  }
});

describe("a case set aside", () => {
  const mine = standing("claimed by Mira");

  test("comes back to whoever set it aside, or to whom it was assigned", () => {
    expect(setWaiting(mine, mira, minutes(30), null, NOW)).toMatchObject({
      assignedTo: "mira",
      claimedBy: null,
    });
    const assigned = { ...mine, assignedTo: "tove" };
    expect(setWaiting(assigned, mira, minutes(30), null, NOW)).toMatchObject({ assignedTo: "tove" });
  });

  test("returns once its time has come, and to the supervisors if it was theirs", () => {
    const waiting = { ...standing("waiting, Mira's"), waitUntil: NOW };
    expect(whatTimeBrings(waiting, NOW)).toEqual({ state: "open", waitUntil: null });
    expect(whatTimeBrings({ ...waiting, escalatedAt: NOW }, NOW)).toMatchObject({ state: "escalated" });
  });

  test.each([
    ["in the past", NOW, null],
    ["more than 30 days ahead", minutes(30 * 24 * 60 + 1), null],
    ["at the end of the payment's hold or later", minutes(45), minutes(45)],
  ])("may not wait for a time %s", (_, until, holdExpiresAt) => {
    expect(() => setWaiting(mine, mira, until, holdExpiresAt, NOW)).toThrow(KnownError);
  });
});

describe("an escalated case", () => {
  test("belongs to nobody until a supervisor takes it, and its reviewer no longer sees it", () => {
    const change = escalate({ ...standing("claimed by Mira"), assignedTo: "mira" }, mira, NOW);
    expect(change).toMatchObject({ state: "escalated", assignedTo: null, claimedBy: null, escalatedAt: NOW });
    const after = { ...standing("open"), ...change };
    expect(maySee(after, { personId: "mira", seesAll: false })).toBe(false);
    expect(isTakeable(after, mira, NOW)).toBe(false);
    expect(isTakeable(after, supervisor, NOW)).toBe(true);
  });

  test("goes back to everybody's queue when a supervisor assigns it to a reviewer", () => {
    expect(assign(standing("escalated"), mira, NOW)).toMatchObject({ escalatedAt: null, assignedTo: "mira" });
    expect(assign(standing("escalated"), supervisor, NOW)).toMatchObject({ escalatedAt: minutes(-30) });
  });
});

describe("what a reviewer sees", () => {
  const seen: Record<Situation, boolean> = {
    open: true,
    "open, assigned to Mira": true,
    "open, assigned to Tove": false,
    "claimed by Mira": true,
    "claimed by Tove": true,
    "claimed by Tove, lease over": true,
    "waiting, Mira's": true,
    "waiting, Tove's": false,
    escalated: false,
    "escalated, claimed by Sol": false,
    decided: true,
    lapsed: true,
  };
  test.each(Object.entries(seen) as [Situation, boolean][])(
    "of a case that is %s: %s",
    (situation, wanted) => {
      expect(maySee(standing(situation), { personId: "mira", seesAll: false })).toBe(wanted);
      expect(maySee(standing(situation), { personId: "sol", seesAll: true })).toBe(true);
    },
  );
});

test("a lease ends at its moment, not after it", () => {
  const row = { ...standing("claimed by Tove"), claimExpiresAt: NOW };
  expect(holderOf(row, NOW)).toBeNull();
  expect(holderOf(row, new Date(NOW.getTime() - 1))).toBe("tove");
});

test("next hands out open, escalated and lapsed claims, never a waiting, held or closed case", () => {
  const states = (Object.keys(SITUATIONS) as Situation[]).filter((situation) =>
    isTakeable(standing(situation), supervisor, NOW),
  );
  expect(states).toEqual(["open", "claimed by Tove, lease over", "escalated"]);
});
