import "server-only";
import type { HeldScorer } from "../../learning/held-scorer";
import type { PolicyInForce } from "../../policy/read";
import type { Thresholds } from "../../policy/rules";
import { inOrder, keysOf, type Place, type Ranking } from "./order";
import { Breath } from "./turns";
import type { CaseFacts, WaitingCases } from "./waiting-cases";

/** The waiting cases in their order at one version; index 0 is the best case. */
export class RankingView {
  readonly version: number;
  readonly logSeq: number;

  private constructor(
    private readonly cases: WaitingCases,
    held: Pick<HeldScorer, "version" | "logSeq">,
    readonly policy: PolicyInForce,
    readonly thresholds: Thresholds,
    private readonly slots: Uint32Array,
    private readonly ranking: Ranking,
    private readonly computedMs: number,
  ) {
    this.version = held.version;
    this.logSeq = held.logSeq;
  }

  /** The caller holds off changes until it is made; others have their turn in between. */
  static async of(
    cases: WaitingCases,
    held: Pick<HeldScorer, "version" | "logSeq">,
    policy: PolicyInForce,
    thresholds: Thresholds,
    now: Date,
  ): Promise<RankingView> {
    const breath = new Breath();
    const slots = cases.slotsByArrival();
    const keys = keysOf(cases.rankable(slots), policy.terms, now.getTime());
    await breath.take();
    return new RankingView(cases, held, policy, thresholds, slots, inOrder(keys), now.getTime());
  }

  /** The order changes by the clock alone where a hold comes close to its end. */
  isGoodAt(now: Date): boolean {
    const nowMs = now.getTime();
    return nowMs >= this.computedMs && nowMs < this.ranking.goodUntilMs;
  }

  get size(): number {
    return this.slots.length;
  }

  /** How many at the front are holds about to expire. */
  get expiring(): number {
    return this.ranking.expiring;
  }

  caseAt(index: number): CaseFacts {
    return this.cases.factsIn(this.slotAt(index));
  }

  /** Log-odds in nats. */
  logitAt(index: number): number {
    return this.cases.published[this.slotAt(index)] as number;
  }

  placeAt(index: number): Place {
    const position = this.ranking.order[index] as number;
    return {
      expiring: index < this.ranking.expiring,
      key: this.ranking.keys[position] as number,
      number: this.caseAt(index).number,
    };
  }

  /** By arrival, oldest first. */
  arrivedAt(position: number): CaseFacts {
    return this.cases.factsIn(this.slots[position] as number);
  }

  find(caseId: string): { facts: CaseFacts; logit: number } | null {
    const facts = this.cases.find(caseId);
    return facts ? { facts, logit: this.cases.logitOf(caseId) as number } : null;
  }

  private slotAt(index: number): number {
    return this.slots[this.ranking.order[index] as number] as number;
  }
}
