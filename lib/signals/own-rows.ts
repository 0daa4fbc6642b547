import "server-only";
import { and, asc, eq, inArray } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { approvals } from "@/db/schema/approvals";
import { ownSignals } from "@/db/schema/learning";
import { people } from "@/db/schema/people";
import { conflict, invalid, notFound } from "../errors";
import { compileFormula } from "./own-formula";
import type { OwnDefinition } from "./signal-set";

export type OwnRow = typeof ownSignals.$inferSelect;

/**
 * Every own signal, locked until the transaction ends: they are drafted, changed and switched one at a time. Taken
 * before the scorer's lock. There are few of them.
 */
export async function lockOwnSignals(tx: Tx): Promise<OwnRow[]> {
  return tx.select().from(ownSignals).orderBy(asc(ownSignals.id)).for("update");
}

/** @throws KnownError not_found, conflict */
export function ownOrThrow(rows: readonly OwnRow[], id: string, revision?: number): OwnRow {
  const row = rows.find((one) => one.id === id);
  if (!row) throw notFound("The signal");
  if (row.isArchived) throw conflict("This signal has been archived");
  if (revision !== undefined && row.revision !== revision)
    throw conflict("This signal has changed since you saw it");
  return row;
}

/** Those that have a place in the vector. */
export const placed = (rows: readonly OwnRow[]): OwnDefinition[] =>
  rows.flatMap(({ id, key, name, sentence, formula, middle, reach, position, state }) =>
    position === null
      ? []
      : [{ id, key, name, sentence, formula, middle, reach, position, isOn: state === "on" }],
  );

/** @throws KnownError invalid, saying where */
export function refuseBadFormula(formula: string): void {
  const { problem } = compileFormula(formula);
  if (!problem) return;
  const place = problem.at === null ? "" : ` (character ${problem.at + 1})`;
  throw invalid([{ path: "formula", message: `${problem.message}${place}` }]);
}

export type WaitingSwitch = {
  approvalId: string;
  to: "on" | "off";
  proposedBy: string;
  proposedAt: Date;
};

/** Switches that wait for a second person, by signal. */
export async function readWaitingSwitches(db: Executor): Promise<Map<string, WaitingSwitch>> {
  const rows = await db
    .select({
      approvalId: approvals.id,
      kind: approvals.kind,
      subject: approvals.subject,
      proposedBy: people.name,
      proposedAt: approvals.proposedAt,
    })
    .from(approvals)
    .innerJoin(people, eq(people.id, approvals.proposedBy))
    .where(
      and(eq(approvals.state, "waiting"), inArray(approvals.kind, ["signal.switch_on", "signal.switch_off"])),
    );
  return new Map(
    rows.flatMap(({ kind, subject, ...rest }) =>
      "signalId" in subject
        ? [[subject.signalId, { ...rest, to: kind === "signal.switch_on" ? "on" : "off" } as const]]
        : [],
    ),
  );
}

/** What a second person has been asked about stays as it is until they have answered. @throws KnownError conflict */
export async function refuseWhileProposed(tx: Tx, id: string): Promise<void> {
  const waiting = (await readWaitingSwitches(tx)).get(id);
  if (waiting)
    throw conflict("A proposal to switch this signal waits for a second person; withdraw or settle it first");
}
