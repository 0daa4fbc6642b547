import type { PolicyTerms } from "./schema";

/**
 * Terms of a new installation: by capacity, because nobody knows yet where an untrained scorer's
 * probabilities lie, and with the cautious prior of a rare event.
 */
export const DEFAULT_TERMS: PolicyTerms = {
  reviewThreshold: { kind: "capacity", casesPerDay: 100 },
  holdThreshold: 0.8,
  baseRate: 0.01,
  order: "probability",
  sampleShare: 0.03,
  secondReviewShare: 0.05,
  overdueEvery: 5,
  sampleEvery: 20,
  dailyCapacity: 120,
  deadlineMinutes: { review: 24 * 60, hold: 120, sample: 3 * 24 * 60 },
  expiringMinutes: 30,
  lifetimeDays: 14,
  reviewCostMinorPerHour: 3_600,
  falsePositiveCostMinor: 500,
  lossGivenFraud: 0.8,
  lostMargin: 0.02,
  undoMinutes: 10,
  secondReviewWindowDays: 7,
  maturityDays: { cards: 120, other: 90 },
  maturedUnlabelled: "ignored",
  hideScoreUntilVerdict: false,
  takeNextOnly: false,
  channels: {
    card_present: { onHold: "refuse", holdMinutes: 1, atExpiry: "refuse" },
    card_remote: { onHold: "hold", holdMinutes: 24 * 60, atExpiry: "refuse" },
    cash_withdrawal: { onHold: "refuse", holdMinutes: 1, atExpiry: "refuse" },
    credit_transfer: { onHold: "hold", holdMinutes: 24 * 60, atExpiry: "release" },
    instant_transfer: { onHold: "refuse", holdMinutes: 1, atExpiry: "refuse" },
    direct_debit: { onHold: "hold", holdMinutes: 48 * 60, atExpiry: "release" },
  },
};
