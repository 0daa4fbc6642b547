import type { EntityKind, Facts, LabelFacts } from "./facts";
import { logScale, oddsScale } from "./scale";
import { part, plural, roughly, type Signal } from "./signal";

/** Smoothing: as if so many payments more had been decided, of which the prior share fraudulent. */
const PRIOR_SHARE = 0.02;
const PRIOR_PAYMENTS = 2;

const WINDOW_NAMES: Record<keyof LabelFacts, string> = {
  in7d: "in 7 d",
  in14d: "in 14 d",
  in30d: "in 30 d",
  ever: "so far",
};
const FIELDS: Record<EntityKind, string> = {
  account: "accountId",
  card: "cardRef",
  device: "deviceId",
  counterparty: "counterpartyId",
};

function knownFraud(kind: EntityKind, window: keyof LabelFacts): Signal {
  const counts = (facts: Facts) => facts.labels[kind]?.[window] ?? null;
  const when = WINDOW_NAMES[window];
  return {
    key: `${kind}_fraud_${window === "ever" ? "so_far" : window.slice(2)}`,
    name: `Known fraud of the ${kind} ${when}`,
    sentence: `Share and number of the ${kind}'s decided payments ${when} that were fraudulent, as known when the score was taken.`,
    needs: [FIELDS[kind]],
    parts: [
      part(
        `(fraudulent + ${PRIOR_SHARE * PRIOR_PAYMENTS}) / (decided + ${PRIOR_PAYMENTS}) of the ${kind}'s payments ${when}`,
        (facts) => {
          const known = counts(facts);
          if (!known) return null;
          const decided = known.fraudulent + known.legitimate;
          return (known.fraudulent + PRIOR_SHARE * PRIOR_PAYMENTS) / (decided + PRIOR_PAYMENTS);
        },
        oddsScale(PRIOR_SHARE, 0.9),
      ),
      part(
        `number of the ${kind}'s fraudulent payments ${when}`,
        (facts) => counts(facts)?.fraudulent ?? null,
        logScale(0, 10),
      ),
    ],
    reading: ([share = 0, count = 0]) =>
      count < 0.5
        ? "none known"
        : `${plural(count, "fraudulent payment")}, smoothed share ${roughly(100 * share)} %`,
  };
}

export const labelSignals: readonly Signal[] = [
  knownFraud("counterparty", "in7d"),
  knownFraud("counterparty", "in14d"),
  knownFraud("counterparty", "in30d"),
  knownFraud("counterparty", "ever"),
  knownFraud("account", "in14d"),
  knownFraud("account", "ever"),
  knownFraud("device", "in14d"),
  knownFraud("device", "ever"),
  knownFraud("card", "ever"),
];
