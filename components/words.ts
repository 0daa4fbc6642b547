import type { Role } from "@/lib/auth/codes";
import type { CASE_KINDS, CaseState } from "@/lib/cases/codes";
import type { CONFIDENCES, DECISION_KINDS, Typology, Verdict } from "@/lib/decisions/codes";
import type { Order, Zone } from "@/lib/policy/codes";
import type { AUTHENTICATIONS, Channel, DIRECTIONS, PAYMENT_STATES } from "@/lib/transactions/codes";

type Words<Code extends string> = Readonly<Record<Code, string>>;

/** What people read instead of the codes of the API. */
export const CHANNEL_WORDS: Words<Channel> = {
  card_present: "Card, present",
  card_remote: "Card, remote",
  cash_withdrawal: "Cash withdrawal",
  credit_transfer: "Credit transfer",
  instant_transfer: "Instant transfer",
  direct_debit: "Direct debit",
};

export const ZONE_WORDS: Words<Zone> = { pass: "Pass", review: "Review", hold: "Hold" };

export const CASE_STATE_WORDS: Words<CaseState> = {
  open: "Open",
  claimed: "In hand",
  waiting: "Waiting",
  escalated: "Escalated",
  decided: "Decided",
  lapsed: "Lapsed",
};

export const CASE_KIND_WORDS: Words<(typeof CASE_KINDS)[number]> = {
  alert: "Alert",
  sample: "Random sample",
  sibling: "Decided with another",
};

export const PAYMENT_STATE_WORDS: Words<(typeof PAYMENT_STATES)[number]> = {
  pending: "Pending",
  held: "Held",
  released: "Released",
  refused: "Refused",
  settled: "Settled",
  recalled: "Recalled",
  unknown: "Not known",
};

export const DIRECTION_WORDS: Words<(typeof DIRECTIONS)[number]> = {
  outgoing: "Outgoing",
  incoming: "Incoming",
};

export const AUTHENTICATION_WORDS: Words<(typeof AUTHENTICATIONS)[number]> = {
  strong: "Strong",
  single: "Single factor",
  none: "None",
  exempt: "Exempt",
};

export const VERDICT_WORDS: Words<Verdict> = {
  fraudulent: "Fraudulent",
  legitimate: "Legitimate",
  customer_misuse: "Customer misuse",
};

export const CONFIDENCE_WORDS: Words<(typeof CONFIDENCES)[number]> = { sure: "sure", unsure: "unsure" };

export const TYPOLOGY_WORDS: Words<Typology> = {
  lost_or_stolen: "Lost or stolen",
  not_received: "Not received",
  counterfeit: "Counterfeit",
  details_theft: "Card details theft",
  issued_by_fraudster: "Issued by the fraudster",
  modified_by_fraudster: "Modified by the fraudster",
  payer_manipulated: "Payer manipulated",
  other: "Other",
};

export const DECISION_KIND_WORDS: Words<(typeof DECISION_KINDS)[number]> = {
  decision: "Decision",
  correction: "Correction",
  second_review: "Second review",
  adjudication: "Adjudication",
};

export const ORDER_WORDS: Words<Order> = {
  probability: "Probability",
  value_at_risk: "Value at risk",
  learning_value: "Learning value",
};

export const ROLE_WORDS: Words<Role> = {
  reviewer: "Reviewer",
  supervisor: "Supervisor",
  risk_manager: "Risk manager",
  auditor: "Auditor",
  administrator: "Administrator",
};
