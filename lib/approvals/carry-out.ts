import "server-only";
import type { Database, Tx } from "@/db/client";
import type { Context } from "../context";
import { conflict } from "../errors";
import { promoteScorer } from "../learning/promote";
import { foldRemovalAhead, removeLabels } from "../learning/remove-labels";
import type { ReplacedAhead } from "../learning/replace";
import { switchOwnSignal } from "../signals/switch-own";
import type { ApprovalKind, ApprovalSubject } from "./codes";

type Subjects = {
  "scorer.promote": Extract<ApprovalSubject, { scorerId: string }>;
  "signal.switch_on": Extract<ApprovalSubject, { signalId: string }>;
  "signal.switch_off": Extract<ApprovalSubject, { signalId: string }>;
  "labels.remove": Extract<ApprovalSubject, { personId: string }>;
};

/** One line for every kind: the function of its domain, which runs in the approval's transaction. */
const CARRY_OUT: {
  [K in ApprovalKind]:
    | ((ctx: Context, tx: Tx, subject: Subjects[K], ahead: ReplacedAhead | undefined) => Promise<void>)
    | null;
} = {
  "scorer.promote": promoteScorer,
  "signal.switch_on": (ctx, tx, subject) => switchOwnSignal(ctx, tx, subject, "on"),
  "signal.switch_off": (ctx, tx, subject) => switchOwnSignal(ctx, tx, subject, "off"),
  "labels.remove": removeLabels,
};

/** The long part of what was approved, before anything is locked. */
export async function foldAheadOf(
  db: Database,
  kind: ApprovalKind,
  subject: ApprovalSubject,
): Promise<ReplacedAhead | undefined> {
  return kind === "labels.remove" && "personId" in subject ? foldRemovalAhead(db, subject) : undefined;
}

/** @throws KnownError conflict where this kind cannot be carried out */
export async function carryOut<K extends ApprovalKind>(
  ctx: Context,
  tx: Tx,
  kind: K,
  subject: ApprovalSubject,
  ahead: ReplacedAhead | undefined,
): Promise<void> {
  const act = CARRY_OUT[kind];
  if (!act) throw conflict("This is not available here");
  await act(ctx, tx, subject as Subjects[K], ahead);
}
