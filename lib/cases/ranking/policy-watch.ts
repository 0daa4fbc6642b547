import "server-only";
import type { Executor } from "@/db/client";
import { type PolicyInForce, policyInForce } from "../../policy/read";
import type { Thresholds } from "../../policy/rules";
import { thresholdsInForce } from "../../policy/thresholds";

const LONGEST_AGE_MS = 1_000;

export type WatchedPolicy = { inForce: PolicyInForce; thresholds: Thresholds };

/** The policy in force and its two lines, at most a second old. */
export class PolicyWatch {
  private watched: (WatchedPolicy & { readMs: number }) | null = null;

  present(): WatchedPolicy {
    if (!this.watched) throw new Error("The policy has not been read yet");
    return this.watched;
  }

  /** @returns whether another version has come into force, or a line has moved */
  async refresh(db: Executor, now: Date): Promise<boolean> {
    const before = this.watched;
    if (before && now.getTime() - before.readMs < LONGEST_AGE_MS) return false;
    const inForce = await policyInForce(db, now);
    const thresholds = await thresholdsInForce(db, inForce, now);
    this.watched = { inForce, thresholds, readMs: now.getTime() };
    return (
      before?.inForce.version !== inForce.version ||
      before.thresholds.reviewLogit !== thresholds.reviewLogit ||
      before.thresholds.holdLogit !== thresholds.holdLogit
    );
  }
}
