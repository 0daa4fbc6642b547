import type { Zone } from "../../policy/codes";
import { createWaiting, type Scorer, type Waiting } from "../../scorer";
import type { Channel } from "../../transactions/codes";
import type { CASE_KINDS } from "../codes";
import type { CaseStanding } from "../rules";
import { maySee, type Reader } from "../visibility";
import { Columns } from "./columns";
import type { Rankable } from "./order";

/** What the ranking keeps of a waiting case besides its vector. */
export type CaseFacts = CaseStanding & {
  id: string;
  /** Order of arrival. */
  number: number;
  kind: (typeof CASE_KINDS)[number];
  zone: Zone;
  channel: Channel;
  externalId: string;
  accountId: string;
  dueAt: Date;
  /** Null unless the payment is held now. */
  holdExpiresAt: Date | null;
  amountBaseMinor: number;
  revision: number;
  scoreId: number;
  changedAt: Date;
};

/** Waiting cases by slot: vectors and scores in the scorer's typed arrays, the rest beside them. */
export class WaitingCases {
  readonly waiting: Waiting;
  /** Log-odds by slot as last published; what readers see while the scores are being brought forward. */
  published = new Float64Array(0);
  readonly columns = new Columns();
  private readonly facts: (CaseFacts | undefined)[] = [];
  private readonly slots = new Map<string, number>();
  /** Slots in order of arrival. */
  private readonly arrival: number[] = [];
  private readonly assigned = new Map<string, Set<string>>();

  constructor(scorer: Scorer, capacityHint = 0) {
    this.waiting = createWaiting(scorer.dimension, capacityHint, scorer.reading().parts.length);
  }

  get size(): number {
    return this.arrival.length;
  }

  find(caseId: string): CaseFacts | undefined {
    const slot = this.slots.get(caseId);
    return slot === undefined ? undefined : this.facts[slot];
  }

  logitOf(caseId: string): number | undefined {
    const slot = this.slots.get(caseId);
    return slot === undefined ? undefined : this.published[slot];
  }

  factsIn(slot: number): CaseFacts {
    return this.facts[slot] as CaseFacts;
  }

  /** Ids of the cases assigned to a person. */
  assignedTo(personId: string): Iterable<string> {
    return this.assigned.get(personId) ?? [];
  }

  /** How many cases arrived before it; undefined for one that does not wait. */
  positionOf(caseId: string): number | undefined {
    const facts = this.find(caseId);
    return facts && this.arrivalIndex(facts.number);
  }

  isSeenBy(slot: number, reader: Reader): boolean {
    return reader.seesAll || this.columns.isEverybodys[slot] === 1 || maySee(this.factsIn(slot), reader);
  }

  /** Takes a case in, or its new vector, at the scorer's present state. Errors: DimensionError, NotFiniteError. */
  place(facts: CaseFacts, vector: Float64Array, scorer: Scorer): void {
    const present = this.slots.get(facts.id);
    const slot = present ?? this.waiting.add(vector, scorer);
    if (present !== undefined) this.waiting.replace(slot, vector, scorer);
    else this.arrival.splice(this.arrivalIndex(facts.number), 0, slot);
    this.slots.set(facts.id, slot);
    this.setFacts(slot, facts);
    if (slot >= this.published.length) this.growPublished(slot + 1);
    this.published[slot] = this.waiting.logit(slot);
  }

  /** Everything but the vector. */
  update(facts: CaseFacts): void {
    const slot = this.slots.get(facts.id);
    if (slot !== undefined) this.setFacts(slot, facts);
  }

  remove(caseId: string): void {
    const slot = this.slots.get(caseId);
    if (slot === undefined) return;
    this.arrival.splice(this.arrivalIndex(this.factsIn(slot).number), 1);
    this.waiting.remove(slot);
    this.slots.delete(caseId);
    this.setFacts(slot, undefined);
  }

  slotsByArrival(): Uint32Array {
    return new Uint32Array(this.arrival);
  }

  /** The cases in these slots, for ranking. */
  rankable(slots: Uint32Array): Rankable {
    return {
      count: slots.length,
      logit: (i) => this.published[slots[i] as number] as number,
      leverage: (i) => this.waiting.leverage(slots[i] as number),
      amountBaseMinor: (i) => this.columns.amountBaseMinor[slots[i] as number] as number,
      holdEndMs: (i) => this.columns.holdEndMs[slots[i] as number] as number,
    };
  }

  private setFacts(slot: number, facts: CaseFacts | undefined): void {
    const before = this.facts[slot];
    if (before?.assignedTo) this.assigned.get(before.assignedTo)?.delete(before.id);
    this.facts[slot] = facts;
    if (!facts) return;
    this.columns.set(slot, facts);
    if (facts.assignedTo === null) return;
    const theirs = this.assigned.get(facts.assignedTo) ?? new Set();
    this.assigned.set(facts.assignedTo, theirs.add(facts.id));
  }

  /** First place in the order of arrival whose number is not below. */
  private arrivalIndex(number: number): number {
    let low = 0;
    let high = this.arrival.length;
    while (low < high) {
      const middle = (low + high) >>> 1;
      if (this.factsIn(this.arrival[middle] as number).number < number) low = middle + 1;
      else high = middle;
    }
    return low;
  }

  private growPublished(least: number): void {
    const larger = new Float64Array(Math.max(least, 2 * this.published.length, 64));
    larger.set(this.published);
    this.published = larger;
  }
}
