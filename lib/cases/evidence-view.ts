import { natsToDecibans, probabilityOf } from "../decibans";
import type { Evidence } from "../learning/evidence";
import type { Thresholds } from "../policy/rules";
import { CATALOGUE_VERSION } from "../signals/catalogue";
import { everyPaymentNats, groupContributions } from "../signals/group";
import type { SignalSet } from "../signals/signal-set";
import type { WithoutSignal } from "../signals/what-would-change";
import type { EvidenceView } from "./schema";

export type Scored = {
  evidence: Evidence;
  vector: Float64Array;
  missing: Uint8Array;
  /** The set that vector, marks and evidence are of. */
  signals: SignalSet;
  /** What would change it, where the scorer that gave it is at hand. */
  without: readonly WithoutSignal[] | null;
};

/**
 * Evidence as people read it, in decibans: base rate + one line per signal + what is held back for lack of experience
 * = total. What the scorer adds to every payment alike counts towards the base rate.
 */
export function evidenceView(
  scored: Scored,
  thresholds: Thresholds,
  versions: { scorerName: string; scorerVersion: number; policyVersion: number },
): EvidenceView {
  const { evidence } = scored;
  const common = isOfThisCatalogue(scored) ? everyPaymentNats(evidence.contributions) : 0;
  return {
    probability: probabilityOf(evidence.logit),
    totalDecibans: natsToDecibans(evidence.logit),
    baseRateDecibans: natsToDecibans(evidence.offset + common),
    signals: isOfThisCatalogue(scored)
      ? groupContributions(evidence.contributions, scored.vector, scored.missing, scored.signals.own)
      : [earlierSignals(evidence)],
    littleExperienceDecibans: natsToDecibans(evidence.pull),
    withoutSignals: scored.without?.map(withoutSignalView) ?? null,
    reviewDecibans: natsToDecibans(thresholds.reviewLogit),
    holdDecibans: natsToDecibans(thresholds.holdLogit),
    ...versions,
  };
}

export function withoutSignalView({ key, name, logit, change }: WithoutSignal) {
  return {
    key,
    name,
    totalDecibans: natsToDecibans(logit),
    probability: probabilityOf(logit),
    changeDecibans: natsToDecibans(change),
  };
}

const isOfThisCatalogue = ({ signals }: Scored) => signals.catalogueVersion === CATALOGUE_VERSION;

/** The catalogue of another version cannot name its coordinates; their sum still belongs on the balance. */
function earlierSignals({ contributions }: Evidence) {
  return {
    key: "earlier_signals",
    name: "Signals of an earlier catalogue",
    reading: "scored before the signals changed",
    explanation: "The sum of all signals as they were defined when this was scored.",
    decibans: natsToDecibans(contributions.reduce((sum, nats) => sum + nats, 0)),
    available: true,
  };
}
