import type { CaseView } from "@/lib/cases/schema";
import type { DecideView } from "@/lib/decisions/schema";
import { ApiProblem, api } from "../api";
import type { Sent } from "./desk-state";

/** The best case the server will hand to this person, claimed; null when there is none. */
export const takeNext = (notThese: readonly string[]): Promise<CaseView | null> =>
  api("POST /api/queue/next", { notThese: notThese.slice(-10) });

export const readCase = (caseId: string) => api("GET /api/cases/{id}", { id: caseId }) as Promise<CaseView>;

export async function claimAndRead(caseId: string): Promise<CaseView> {
  await api("POST /api/cases/{id}/claim", { id: caseId });
  return readCase(caseId);
}

/** Cases this person holds already, as after the page was loaded anew, with their leases renewed. @throws ApiProblem */
export async function readHeld(personId: string): Promise<CaseView[]> {
  const mine = await api("GET /api/queue", { assignee: "me", state: "claimed", limit: 10 });
  const held = (mine?.items ?? []).filter((item) => item.claimedBy?.id === personId);
  return Promise.all(held.map((item) => claimAndRead(item.caseId)));
}

/** A lost answer is asked for again under the same key: the server gives the one it gave before. */
const ATTEMPTS_AFTER_MS = [0, 1_000, 3_000];

/** Sends what the person did. @returns what a decision moved, or null for other acts. @throws ApiProblem */
export async function deliver(sent: Sent): Promise<DecideView | null> {
  let failure: unknown;
  for (const afterMs of ATTEMPTS_AFTER_MS) {
    await new Promise((resolve) => setTimeout(resolve, afterMs));
    try {
      return await deliverOnce(sent);
    } catch (error) {
      failure = error;
      if (!(error instanceof ApiProblem) || (error.status !== 0 && error.status < 500)) throw error;
    }
  }
  throw failure;
}

async function deliverOnce({ sentId, case: { caseId, revision }, act }: Sent): Promise<DecideView | null> {
  const options = { idempotencyKey: sentId };
  switch (act.kind) {
    case "decision": {
      const { verdict, typology, confidence } = act.finding;
      return api(
        "POST /api/cases/{id}/decision",
        {
          id: caseId,
          verdict,
          typology,
          confidence,
          seenVersion: revision,
          scoreWasHidden: act.scoreWasHidden,
          together: act.together.map((item) => ({ ...item, verdict, typology })),
          ...(act.note.trim() && { note: act.note }),
        },
        options,
      );
    }
    case "escalation":
      await api("POST /api/cases/{id}/escalate", { id: caseId, note: act.note }, options);
      return null;
    case "waiting":
      await api("POST /api/cases/{id}/wait", { id: caseId, until: act.until, note: act.note }, options);
      return null;
  }
}

/**
 * The case after a refused act, if it is still this person's: claimed anew where only the lease had run out.
 * Where the server does not answer at all, the case stays as it was seen.
 */
export async function stillMine(sent: Sent): Promise<CaseView | null> {
  try {
    const now = await readCase(sent.case.caseId);
    if (now.mine) return now;
    return now.state === "open" ? await claimAndRead(now.caseId) : null;
  } catch (error) {
    if (error instanceof ApiProblem && error.status !== 0 && error.status < 500) return null;
    return sent.case;
  }
}

/** What went wrong, in a sentence for the person. */
export function problemWords(error: unknown): string {
  if (!(error instanceof ApiProblem)) throw error;
  const fields = error.errors.map(({ path, message }) => `${path} ${message}`);
  // The server names the case where several are decided in one act; here its name comes first anyway.
  const message = error.message.replace(/^Case \d+: /, "");
  return [message, ...fields].join("; ").replace(/\.$/, "");
}
