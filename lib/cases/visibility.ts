import type { Actor } from "../context";
import type { CaseStanding } from "./rules";

/** Whose eyes: everything, or a reviewer's own and unassigned cases. */
export type Reader = { personId: string | null; seesAll: boolean };

const SEE_ALL = ["supervisor", "risk_manager", "auditor"] as const;

/** The caller has been asked for `cases.read` before; this says how far it reaches. */
export function readerOf(actor: Actor): Reader {
  if (actor.kind !== "person") return { personId: null, seesAll: actor.kind !== "anonymous" };
  return { personId: actor.personId, seesAll: SEE_ALL.some((role) => actor.roles.includes(role)) };
}

export function maySee(
  row: Pick<CaseStanding, "assignedTo" | "claimedBy" | "escalatedAt">,
  reader: Reader,
): boolean {
  if (reader.seesAll) return true;
  if (reader.personId === null) return false;
  if (row.claimedBy === reader.personId || row.assignedTo === reader.personId) return true;
  return row.assignedTo === null && row.escalatedAt === null;
}
