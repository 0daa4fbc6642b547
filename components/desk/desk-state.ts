import type { CaseStateView, CaseView } from "@/lib/cases/schema";
import type { Finding } from "./marker";

/** What the person did with a case; each is shown as done at once and taken back if the server refuses. */
export type Act =
  | {
      kind: "decision";
      finding: Finding;
      note: string;
      scoreWasHidden: boolean;
      together: readonly TogetherItem[];
    }
  | { kind: "escalation"; note: string }
  | { kind: "waiting"; until: string; note: string };

export type TogetherItem = { caseId: string } | { transactionId: string };

/** An act on its way to the server, or answered. `sentId` is its idempotency key. */
export type Sent = {
  sentId: string;
  case: CaseView;
  act: Act;
  state: "sending" | "done" | "refused" | "undone";
  undoUntil: string | null;
  /** Why the server refused; shown until the person has seen to it. */
  problem: string | null;
};

export type DeskState = {
  /** Claimed cases in the order they will be worked: the first is in hand, the second at the elbow. */
  ready: readonly CaseView[];
  /** Notes being written, by case; they outlive a refusal. */
  notes: Readonly<Record<string, string>>;
  /** Newest first. */
  sent: readonly Sent[];
  /** Cases that were in hand before, newest last. */
  visited: readonly string[];
  /** Put back by this person a moment ago; the server is asked not to serve them at once again. */
  putBack: readonly string[];
  /** Claims that the Desk holds no longer and must give back. */
  toRelease: readonly string[];
  /** The server had nothing more to serve. */
  dry: boolean;
};

export type DeskEvent =
  | { kind: "served"; case: CaseView }
  | { kind: "ran_dry" }
  | { kind: "may_have_more" }
  | { kind: "taken_in_hand"; case: CaseView }
  | { kind: "put_back" }
  | { kind: "note_typed"; caseId: string; note: string }
  | { kind: "committed"; sentId: string; act: Act }
  | { kind: "accepted"; sentId: string; undoUntil: string | null }
  | { kind: "refused"; sentId: string; problem: string; stillMine: CaseView | null }
  | { kind: "dismissed"; sentId: string }
  | { kind: "undone"; sentId: string }
  | { kind: "renewed"; state: CaseStateView }
  | { kind: "read_again"; case: CaseView }
  | { kind: "lost"; caseId: string }
  | { kind: "released"; caseIds: readonly string[] };

export const EMPTY_DESK: DeskState = {
  ready: [],
  notes: {},
  sent: [],
  visited: [],
  putBack: [],
  toRelease: [],
  dry: false,
};

/** One in hand, one at the elbow, and one that was fetched back in front of both. */
const MOST_CLAIMED = 3;
const MOST_SENT = 50;
const MOST_PUT_BACK = 8;
/** How many are kept claimed and loaded without being asked for: the one in hand and the one at the elbow. */
export const KEPT_READY = 2;

export function deskReducer(state: DeskState, event: DeskEvent): DeskState {
  switch (event.kind) {
    case "served":
      if (state.ready.some((one) => one.caseId === event.case.caseId)) return state;
      return served(state, event.case);
    case "ran_dry":
      // Only what was put back is left, if anything: it may come again.
      return { ...state, dry: true, putBack: [] };
    case "may_have_more":
      return state.dry ? { ...state, dry: false } : state;
    case "taken_in_hand":
      return inFront(state, event.case);
    case "put_back": {
      const [hand, ...rest] = state.ready;
      if (!hand) return state;
      return {
        ...leaving(state, hand.caseId),
        ready: rest,
        putBack: [...state.putBack, hand.caseId].slice(-MOST_PUT_BACK),
        toRelease: [...state.toRelease, hand.caseId],
        dry: false,
      };
    }
    case "note_typed":
      return { ...state, notes: { ...state.notes, [event.caseId]: event.note } };
    case "committed":
      return committed(state, event.sentId, event.act);
    case "accepted":
      return accepted(state, event.sentId, event.undoUntil);
    case "refused": {
      const after = settled(state, event.sentId, { state: "refused", problem: event.problem });
      return event.stillMine ? inFront(after, event.stillMine) : after;
    }
    case "dismissed":
      return { ...state, sent: state.sent.filter((one) => one.sentId !== event.sentId) };
    case "undone":
      return settled(state, event.sentId, { state: "undone", undoUntil: null });
    case "renewed":
      return {
        ...state,
        ready: state.ready.map((one) =>
          one.caseId === event.state.caseId
            ? { ...one, revision: event.state.revision, claimExpiresAt: event.state.claimExpiresAt }
            : one,
        ),
      };
    case "read_again":
      return readAgain(event.case.mine ? state : lost(state, event.case.caseId), event.case);
    case "lost":
      return lost(state, event.caseId);
    case "released":
      return { ...state, toRelease: state.toRelease.filter((id) => !event.caseIds.includes(id)) };
  }
}

/** The newest decision that can still be taken back; what is still on its way cannot yet. */
export function undoable(state: DeskState, nowMs: number): Sent | null {
  const newest = state.sent.find((one) => one.act.kind === "decision" && one.state !== "refused");
  if (newest?.state !== "done" || newest.undoUntil === null) return null;
  return Date.parse(newest.undoUntil) > nowMs ? newest : null;
}

/** The case that was in hand before this one, unless it is in hand or at the elbow already. */
export function previousCase(state: DeskState): string | null {
  const here = new Set(state.ready.slice(0, 1).map((one) => one.caseId));
  return state.visited.findLast((id) => !here.has(id)) ?? null;
}

/** Behind what is there; more than the Desk keeps, as after a page was loaded anew, goes back. */
function served(state: DeskState, found: CaseView): DeskState {
  if (state.ready.length >= MOST_CLAIMED) {
    return { ...state, toRelease: [...state.toRelease, found.caseId] };
  }
  return { ...withDraft(state, found), ready: [...state.ready, found], dry: false };
}

/** From the elbow a case goes unseen; in hand it stays before the person, who is told that it is no longer theirs. */
function lost(state: DeskState, caseId: string): DeskState {
  const [hand, ...rest] = state.ready;
  if (hand?.caseId === caseId)
    return { ...state, ready: [{ ...hand, mine: false, claimedBy: null }, ...rest] };
  return { ...state, ready: state.ready.filter((one) => one.caseId !== caseId), dry: false };
}

function readAgain(state: DeskState, found: CaseView): DeskState {
  return { ...state, ready: state.ready.map((one) => (one.caseId === found.caseId ? found : one)) };
}

function committed(state: DeskState, sentId: string, act: Act): DeskState {
  const [hand, ...rest] = state.ready;
  if (!hand) return state;
  // What is decided together with this one must not come to hand next.
  const along = new Set(
    act.kind === "decision" ? act.together.flatMap((item) => ("caseId" in item ? item.caseId : [])) : [],
  );
  const sent: Sent = { sentId, case: hand, act, state: "sending", undoUntil: null, problem: null };
  return {
    ...leaving(state, hand.caseId),
    ready: rest.filter((one) => !along.has(one.caseId)),
    sent: [sent, ...state.sent].slice(0, MOST_SENT),
    dry: false,
  };
}

/** The note has gone with the act, and an earlier refusal for the same case is seen to. */
function accepted(state: DeskState, sentId: string, undoUntil: string | null): DeskState {
  const caseId = state.sent.find((one) => one.sentId === sentId)?.case.caseId;
  const { [caseId ?? ""]: _gone, ...notes } = state.notes;
  const after = settled({ ...state, notes }, sentId, { state: "done", undoUntil });
  return {
    ...after,
    sent: after.sent.filter((one) => !(one.state === "refused" && one.case.caseId === caseId)),
  };
}

function settled(state: DeskState, sentId: string, change: Partial<Sent>): DeskState {
  return {
    ...state,
    sent: state.sent.map((one) => (one.sentId === sentId ? { ...one, ...change } : one)),
  };
}

function inFront(state: DeskState, found: CaseView): DeskState {
  const others = state.ready.filter((one) => one.caseId !== found.caseId);
  const ready = [found, ...others];
  const [before] = state.ready;
  return {
    ...withDraft(before && before.caseId !== found.caseId ? leaving(state, before.caseId) : state, found),
    ready: ready.slice(0, MOST_CLAIMED),
    putBack: state.putBack.filter((id) => id !== found.caseId),
    toRelease: [
      ...state.toRelease.filter((id) => id !== found.caseId),
      ...ready.slice(MOST_CLAIMED).map((one) => one.caseId),
    ],
  };
}

function leaving(state: DeskState, caseId: string): DeskState {
  return { ...state, visited: [...state.visited.filter((id) => id !== caseId), caseId].slice(-MOST_SENT) };
}

/** What was typed here is newer than what the server kept. */
function withDraft(state: DeskState, found: CaseView): DeskState {
  if (found.draft === "" || state.notes[found.caseId] !== undefined) return state;
  return { ...state, notes: { ...state.notes, [found.caseId]: found.draft } };
}
