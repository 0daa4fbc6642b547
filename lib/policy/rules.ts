import { probabilityOf } from "../decibans";
import type { Channel } from "../transactions/codes";
import type { Zone } from "./codes";
import type { PolicyTerms } from "./schema";

/** The two lines on the axis, as log-odds in nats. The hold line never lies below the review line. */
export type Thresholds = { reviewLogit: number; holdLogit: number };

/** A score on a line belongs to the zone above it. */
export function zoneOf(logit: number, thresholds: Thresholds): Zone {
  if (logit >= thresholds.holdLogit) return "hold";
  return logit >= thresholds.reviewLogit ? "review" : "pass";
}

export type Instruction = {
  action: "pass" | "review" | "hold";
  paymentState: "settled" | "held" | "refused";
  holdExpiresAt: Date | null;
};

/** What the sender is told: a channel that cannot hold is refused at once or let go, as the policy says. */
export function instructionFor(
  zone: Zone,
  channel: Channel,
  terms: PolicyTerms,
  receivedAt: Date,
): Instruction {
  const goes = { paymentState: "settled" as const, holdExpiresAt: null };
  if (zone !== "hold") return { action: zone, ...goes };
  const rule = terms.channels[channel];
  switch (rule.onHold) {
    case "hold":
      return {
        action: "hold",
        paymentState: "held",
        holdExpiresAt: new Date(receivedAt.getTime() + rule.holdMinutes * 60_000),
      };
    case "refuse":
      return { action: "hold", paymentState: "refused", holdExpiresAt: null };
    case "let_go":
      return { action: "review", ...goes };
  }
}

/**
 * Expected saving of stopping a payment, in minor units: p·amount·(loss given fraud) − (1 − p)·(cost of a false
 * positive). Source of the form: expected-cost decisions, Elkan, "The foundations of cost-sensitive learning", 2001.
 */
export function valueAtRisk(logit: number, amountBaseMinor: number, terms: PolicyTerms): number {
  const probability = probabilityOf(logit);
  return (
    probability * amountBaseMinor * terms.lossGivenFraud - (1 - probability) * terms.falsePositiveCostMinor
  );
}
