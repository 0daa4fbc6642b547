import "server-only";
import { inBreaths } from "../../breath";
import type { HeldScorer } from "../../learning/held-scorer";
import type { PolicyInForce } from "../../policy/read";
import type { Thresholds } from "../../policy/rules";
import type { Reader } from "../visibility";
import { inOrder, isBehind, keysInSteps, type Place, type Ranking } from "./order";
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
    const slots = cases.slotsByArrival();
    const keys = await inBreaths(keysInSteps(cases.rankable(slots), policy.terms, now.getTime()));
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

  isSeenAt(index: number, reader: Reader): boolean {
    return this.cases.isSeenBy(this.slotAt(index), reader);
  }

  placeAt(index: number): Place {
    const position = this.ranking.order.at(index);
    const { number } = this.caseAt(index);
    return { expiring: index < this.expiring, key: this.ranking.keys[position] as number, number };
  }

  /** How many cases a reader may see, of those that match. */
  countSeenBy(reader: Reader, matches: ((facts: CaseFacts) => boolean) | null): number {
    if (reader.seesAll && !matches) return this.size;
    let count = 0;
    for (const slot of this.slots) {
      if (this.cases.isSeenBy(slot, reader) && (!matches || matches(this.cases.factsIn(slot)))) count += 1;
    }
    return count;
  }

  /** Samples by arrival, oldest first. */
  *samples(): Iterable<CaseFacts> {
    const { isSample } = this.cases.columns;
    for (const slot of this.slots) if (isSample[slot] === 1) yield this.cases.factsIn(slot);
  }

  /** Cases whose deadline lies before a time, by arrival; `atMs` is asked anew for each. */
  *dueBefore(atMs: () => number): Iterable<CaseFacts> {
    const { dueMs } = this.cases.columns;
    for (const slot of this.slots) if ((dueMs[slot] as number) < atMs()) yield this.cases.factsIn(slot);
  }

  /** Cases assigned to a person that are no holds about to expire, best first. */
  assignedTo(personId: string): CaseFacts[] {
    const inFront = new Set<number>();
    for (let index = 0; index < this.expiring; index++) inFront.add(this.ranking.order.at(index));
    const placed: { facts: CaseFacts; place: Place }[] = [];
    for (const caseId of this.cases.assignedTo(personId)) {
      const position = this.cases.positionOf(caseId);
      if (position === undefined || inFront.has(position)) continue;
      const facts = this.cases.factsIn(this.slots[position] as number);
      const key = this.ranking.keys[position] as number;
      placed.push({ facts, place: { expiring: false, key, number: facts.number } });
    }
    placed.sort((a, b) => (isBehind(a.place, b.place) ? 1 : -1));
    return placed.map(({ facts }) => facts);
  }

  /** Log-odds in nats; undefined for a case that does not wait. */
  logitOf(caseId: string): number | undefined {
    return this.cases.logitOf(caseId);
  }

  private slotAt(index: number): number {
    return this.slots[this.ranking.order.at(index)] as number;
  }
}
