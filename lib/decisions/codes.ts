export const VERDICTS = ["fraudulent", "legitimate", "customer_misuse"] as const;
export type Verdict = (typeof VERDICTS)[number];

/** Families of EBA/GL/2018/05: four for cards, three for transfers, and the rest. */
export const TYPOLOGIES = [
  "lost_or_stolen",
  "not_received",
  "counterfeit",
  "details_theft",
  "issued_by_fraudster",
  "modified_by_fraudster",
  "payer_manipulated",
  "other",
] as const;
export type Typology = (typeof TYPOLOGIES)[number];

export const CONFIDENCES = ["sure", "unsure"] as const;
export const DECISION_KINDS = ["decision", "correction", "second_review", "adjudication"] as const;

export const LABEL_KINDS = [
  "decision",
  "undo",
  "second_review",
  "adjudication",
  "outcome",
  "correction",
  "removal",
  "matured",
] as const;
export type LabelKind = (typeof LABEL_KINDS)[number];
