import { eq, sql } from "drizzle-orm";
import { ledger } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import type { KeyActor, PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { newId } from "@/lib/new-id";
import { receiveOutcomes } from "@/lib/outcomes/receive";
import type { OutcomeResult } from "@/lib/outcomes/schema";
import { type WaitingCase, WORLD_START, type World } from "../support/world";

export const sender: KeyActor = { kind: "key", id: newId(), source: "test", scopes: ["outcomes:write"] };
export const LATER = new Date(WORLD_START.getTime() + 7 * 86_400_000);
export const AMOUNT = 12_900;

/** Sends one outcome, by default a chargeback for fraud. */
export async function sendOutcome(
  world: World,
  payment: WaitingCase | string,
  more: Record<string, unknown> = {},
  actor = sender,
): Promise<OutcomeResult> {
  const externalId = typeof payment === "string" ? payment : payment.transactionId;
  const item = {
    externalId,
    kind: "chargeback",
    reasonFamily: "fraud",
    stage: "opened",
    occurredAt: LATER.toISOString(),
    ...more,
  };
  const { results } = await receiveOutcomes(world.ctx(actor, LATER), { outcomes: [item] });
  const [result] = results;
  if (!result) throw new Error("no result");
  return result;
}

let seed = 100;

export async function waitingCase(world: World, options: { held?: boolean } = {}): Promise<WaitingCase> {
  seed += 1;
  const [made] = await world.waitingCases(1, { seed, amountMinor: AMOUNT, ...options });
  return made as WaitingCase;
}

export function decide(
  world: World,
  reviewer: PersonActor,
  on: WaitingCase,
  verdict: "fraudulent" | "legitimate" | "customer_misuse",
) {
  return decideCase(world.ctx(reviewer), {
    id: on.caseId,
    verdict,
    typology: verdict === "fraudulent" ? "details_theft" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });
}

export async function labelOf(world: World, { transactionId }: { transactionId: string }) {
  const [row] = await world.db.select().from(transactions).where(eq(transactions.id, transactionId));
  return row?.label ?? null;
}

export async function moneyOf(world: World, { transactionId }: { transactionId: string }) {
  const figure = (column: string) => sql`coalesce(sum(${sql.raw(column)}), 0)`.mapWith(Number);
  const [row] = await world.db
    .select({
      attempted: figure("attempted_minor"),
      prevented: figure("prevented_minor"),
      missed: figure("missed_minor"),
      recovered: figure("recovered_minor"),
      falsePositive: figure("false_positive_minor"),
    })
    .from(ledger)
    .where(eq(ledger.transactionId, transactionId));
  return row;
}
