import { eq } from "drizzle-orm";
import { transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { approveProposal } from "@/lib/approvals/approve";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { labelFromOutcomes } from "@/lib/learning/label-outcomes";
import { newId } from "@/lib/new-id";
import { draftSignal } from "@/lib/signals/draft-own";
import type { DraftSignalInput } from "@/lib/signals/own-schema";
import { proposeSwitch } from "@/lib/signals/propose-switch";
import { type WaitingCase, WORLD_START, type World } from "../support/world";

export const LOYALTY: DraftSignalInput = {
  name: "Loyal customer",
  sentence: "Years in the loyalty scheme; strangers to it are tried first.",
  formula: "attributes.loyalty_years > 3 ? 1 : attributes.loyalty_years / 4",
  middle: 0.25,
  reach: 0.75,
};

/** An installation's office, whose clock moves on by a second with every act. */
export class Office {
  private clockMs = WORLD_START.getTime();
  private constructor(
    readonly world: World,
    readonly reviewer: PersonActor,
    readonly supervisor: PersonActor,
    readonly second: PersonActor,
  ) {}

  static async open(world: World): Promise<Office> {
    return new Office(
      world,
      await world.person("reviewer"),
      await world.person("supervisor"),
      await world.person("risk_manager"),
    );
  }

  as(actor: PersonActor) {
    this.clockMs += 1_000;
    return this.world.ctx(actor, new Date(this.clockMs));
  }

  /** Waiting cases whose payments bear an attribute; every seventh lacks it. */
  async cases(count: number, seed: number): Promise<WaitingCase[]> {
    const waiting = await this.world.waitingCases(count, { seed });
    for (const [index, { transactionId }] of waiting.entries()) {
      const attributes: Record<string, string | number> =
        index % 7 === 6 ? { other: "x" } : { loyalty_years: ((index * 37) % 11) / 2 };
      await this.world.db.update(transactions).set({ attributes }).where(eq(transactions.id, transactionId));
    }
    return waiting;
  }

  decide(waiting: WaitingCase, fraudulent: boolean, seenVersion = 1) {
    return decideCase(this.as(this.reviewer), {
      id: waiting.caseId,
      verdict: fraudulent ? "fraudulent" : "legitimate",
      typology: fraudulent ? "other" : null,
      confidence: "sure",
      seenVersion,
      scoreWasHidden: false,
      together: [],
    });
  }

  async decideAll(waiting: readonly WaitingCase[]): Promise<void> {
    for (const [index, one] of waiting.entries()) await this.decide(one, index % 3 === 0);
  }

  /** Labels from outside, in one go. */
  async label(waiting: readonly WaitingCase[]): Promise<void> {
    const items = waiting.map(({ transactionId }, index) => ({
      transactionId,
      outcomeId: newId(),
      label: index % 3 === 0 ? (1 as const) : (-1 as const),
    }));
    const now = this.as(this.reviewer).now();
    await inTransaction(this.world.db, (tx) => labelFromOutcomes(tx, now, items));
  }

  draft(input: Partial<DraftSignalInput> = {}) {
    return draftSignal(this.as(this.supervisor), { ...LOYALTY, ...input });
  }

  propose(signalId: string, to: "on" | "off") {
    return proposeSwitch(this.as(this.supervisor), { id: signalId, to, reason: "Seen in last week's cases" });
  }

  async switch(signalId: string, to: "on" | "off"): Promise<void> {
    const { approvalId } = await this.propose(signalId, to);
    await approveProposal(this.as(this.second), { id: approvalId });
  }
}
