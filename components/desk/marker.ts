import type { CONFIDENCES, Typology, Verdict } from "@/lib/decisions/codes";
import type { Channel } from "@/lib/transactions/codes";

type Confidence = (typeof CONFIDENCES)[number];

/** Where a finding lies: five stops along the balance, fraud to the right, and customer misuse beside it. */
export type Marker =
  | "legitimate_sure"
  | "legitimate_unsure"
  | "none"
  | "fraudulent_unsure"
  | "fraudulent_sure"
  | "misuse_sure"
  | "misuse_unsure";

export const STOPS = [
  "legitimate_sure",
  "legitimate_unsure",
  "none",
  "fraudulent_unsure",
  "fraudulent_sure",
] as const satisfies readonly Marker[];

export const MISUSE = ["misuse_sure", "misuse_unsure"] as const satisfies readonly Marker[];

const VERDICTS: Record<Marker, { verdict: Verdict; confidence: Confidence } | null> = {
  legitimate_sure: { verdict: "legitimate", confidence: "sure" },
  legitimate_unsure: { verdict: "legitimate", confidence: "unsure" },
  none: null,
  fraudulent_unsure: { verdict: "fraudulent", confidence: "unsure" },
  fraudulent_sure: { verdict: "fraudulent", confidence: "sure" },
  misuse_sure: { verdict: "customer_misuse", confidence: "sure" },
  misuse_unsure: { verdict: "customer_misuse", confidence: "unsure" },
};

/** One stop along; from misuse, which is no place on the balance, the way starts in the middle. Stops at both ends. */
export function moveMarker(marker: Marker, step: -1 | 1): Marker {
  const stops: readonly Marker[] = STOPS;
  const from = Math.max(stops.indexOf(marker), marker.startsWith("misuse") ? 2 : 0);
  return stops[Math.min(Math.max(from + step, 0), stops.length - 1)] ?? marker;
}

/** The misuse key: sure, then unsure, then back to the middle. */
export function pressMisuse(marker: Marker): Marker {
  if (marker === "misuse_sure") return "misuse_unsure";
  return marker === "misuse_unsure" ? "none" : "misuse_sure";
}

const CARD_TYPOLOGIES: readonly Typology[] = [
  "lost_or_stolen",
  "not_received",
  "counterfeit",
  "details_theft",
  "other",
];
const TRANSFER_TYPOLOGIES: readonly Typology[] = [
  "issued_by_fraudster",
  "modified_by_fraudster",
  "payer_manipulated",
  "other",
];
const CARD_CHANNELS: readonly Channel[] = ["card_present", "card_remote", "cash_withdrawal"];

/** The typologies of EBA/GL/2018/05 that fit the channel, in the order of their number keys. */
export function typologiesFor(channel: Channel): readonly Typology[] {
  return CARD_CHANNELS.includes(channel) ? CARD_TYPOLOGIES : TRANSFER_TYPOLOGIES;
}

export function asksTypology(marker: Marker): boolean {
  return VERDICTS[marker]?.verdict === "fraudulent";
}

export type Finding = { verdict: Verdict; confidence: Confidence; typology: Typology | null };

/** The finding as it would be committed, or what it still lacks. */
export function findingOf(
  marker: Marker,
  typology: Typology | null,
): { finding: Finding } | { lacks: "marker" | "typology" } {
  const found = VERDICTS[marker];
  if (!found) return { lacks: "marker" };
  if (found.verdict !== "fraudulent") return { finding: { ...found, typology: null } };
  return typology === null ? { lacks: "typology" } : { finding: { ...found, typology } };
}

/** A finger still on Enter from the case before must not decide this one. */
const DEAD_MS = 400;

export function mayCommit(appearedAtMs: number, nowMs: number): boolean {
  return nowMs - appearedAtMs >= DEAD_MS;
}
