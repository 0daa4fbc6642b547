import { createHash } from "node:crypto";
import { cases, decisions } from "@/db/schema/cases";
import { scores, transactions } from "@/db/schema/transactions";
import type { Typology, Verdict } from "@/lib/decisions/codes";
import { bookDecision } from "@/lib/losses/book";
import { newId } from "@/lib/new-id";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { World } from "../support/world";

export type PaymentFacts = {
  amountMinor: number;
  amountBaseMinor?: number | null;
  currency?: string;
  occurredAt: Date;
  action?: "pass" | "review" | "hold";
  paymentState?: "settled" | "held" | "refused" | "released" | "recalled";
  source?: string;
  externalId?: string;
  label?: 1 | -1 | null;
};

export type VerdictFacts = {
  verdict: Verdict;
  typology?: Typology | null;
  decidedAt: Date;
  handlingSeconds?: number;
  kind?: "decision" | "correction";
};

/** A payment as intake leaves it. */
export async function insertPayment(world: World, facts: PaymentFacts): Promise<string> {
  const id = newId();
  const { amountMinor, occurredAt, externalId = id } = facts;
  await world.db.insert(transactions).values({
    id,
    source: facts.source ?? "test",
    externalId,
    contentHash: createHash("sha256").update(id).digest(),
    receivedAt: occurredAt,
    occurredAt,
    amountMinor,
    currency: facts.currency ?? "EUR",
    amountBaseMinor: facts.amountBaseMinor === undefined ? amountMinor : facts.amountBaseMinor,
    direction: "outgoing",
    channel: "card_remote",
    accountId: `ACC-${id}`,
    counterpartyId: "SHOP-1",
    action: facts.action ?? "review",
    paymentState: facts.paymentState ?? "settled",
    label: facts.label ?? null,
  });
  return id;
}

/** Opens a case on the payment, already decided. */
export async function insertCase(
  world: World,
  transactionId: string,
  openedAt: Date,
  more: Partial<typeof cases.$inferInsert> = {},
): Promise<string> {
  const [{ id: scoreId }] = (await world.db
    .insert(scores)
    .values({
      transactionId,
      kind: "arrival",
      takenAt: openedAt,
      vector: Buffer.alloc(8),
      missing: Buffer.alloc(8),
      signalSetVersion: 1,
      scorerVersion: 1,
      policyVersion: 1,
      logit: 0,
      leverage: 1,
      zone: "review",
    })
    .$returningId()) as [{ id: number }];
  const caseId = newId();
  await world.db.insert(cases).values({
    id: caseId,
    transactionId,
    kind: "alert",
    state: "decided",
    zone: "review",
    scoreId,
    policyVersion: 1,
    openedAt,
    dueAt: new Date(openedAt.getTime() + 86_400_000),
    lapsesAt: new Date(openedAt.getTime() + 14 * 86_400_000),
    decidedAt: openedAt,
    changedAt: openedAt,
    ...more,
  });
  return caseId;
}

/** Writes a verdict on a case and books its money, as a decision does. */
export async function decide(
  world: World,
  on: { caseId: string; transactionId: string },
  facts: VerdictFacts,
): Promise<string> {
  const decisionId = newId();
  const { verdict, decidedAt, handlingSeconds = 0, kind = "decision" } = facts;
  const typology = facts.typology ?? (verdict === "fraudulent" ? "details_theft" : null);
  const person = await decider(world);
  await world.db.transaction(async (tx) => {
    await tx.insert(decisions).values({
      id: decisionId,
      ...on,
      kind,
      personId: person,
      verdict,
      typology,
      confidence: "sure",
      decidedAt,
      undoUntil: decidedAt,
      scoreId: 1,
      evidence: Buffer.alloc(8),
      scorerVersionBefore: 1,
      scorerVersionAfter: 2,
      policyVersion: 1,
      zone: "review",
      actId: decisionId,
      handlingSeconds,
    });
    const booking = { decisionId, ...on, verdict, typology, handlingSeconds, bookedAt: decidedAt };
    await bookDecision(tx, { ...booking, terms: DEFAULT_TERMS });
  });
  return decisionId;
}

/** A payment with a case and a verdict. */
export async function decidedPayment(world: World, payment: PaymentFacts, verdict: VerdictFacts) {
  const transactionId = await insertPayment(world, payment);
  const caseId = await insertCase(world, transactionId, payment.occurredAt, { decidedAt: verdict.decidedAt });
  const decisionId = await decide(world, { caseId, transactionId }, verdict);
  return { transactionId, caseId, decisionId };
}

const deciders = new WeakMap<World, Promise<string>>();

function decider(world: World): Promise<string> {
  const known = deciders.get(world) ?? world.person("reviewer").then((person) => person.personId);
  deciders.set(world, known);
  return known;
}
