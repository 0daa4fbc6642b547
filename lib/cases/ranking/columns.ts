import { maySee } from "../visibility";
import type { CaseFacts } from "./waiting-cases";

const ANY_REVIEWER = { personId: "", seesAll: false };

/**
 * What every walk over the whole queue looks at, by slot in typed arrays: ten thousand scattered objects would cost
 * more time to fetch from memory than to judge.
 */
export class Columns {
  dueMs = new Float64Array(0);
  /** End of a hold that stands; Infinity where nothing is held. */
  holdEndMs = new Float64Array(0);
  amountBaseMinor = new Float64Array(0);
  isSample = new Uint8Array(0);
  /** 1 where every reviewer may see the case. */
  isEverybodys = new Uint8Array(0);

  set(slot: number, facts: CaseFacts): void {
    if (slot >= this.dueMs.length) this.growTo(Math.max(64, 2 * slot));
    this.dueMs[slot] = facts.dueAt.getTime();
    this.holdEndMs[slot] = facts.holdExpiresAt?.getTime() ?? Number.POSITIVE_INFINITY;
    this.amountBaseMinor[slot] = facts.amountBaseMinor;
    this.isSample[slot] = facts.kind === "sample" ? 1 : 0;
    this.isEverybodys[slot] = maySee(facts, ANY_REVIEWER) ? 1 : 0;
  }

  private growTo(length: number): void {
    this.dueMs = grown(this.dueMs, new Float64Array(length));
    this.holdEndMs = grown(this.holdEndMs, new Float64Array(length));
    this.amountBaseMinor = grown(this.amountBaseMinor, new Float64Array(length));
    this.isSample = grown(this.isSample, new Uint8Array(length));
    this.isEverybodys = grown(this.isEverybodys, new Uint8Array(length));
  }
}

function grown<T extends Float64Array | Uint8Array>(from: T, into: T): T {
  into.set(from);
  return into;
}
