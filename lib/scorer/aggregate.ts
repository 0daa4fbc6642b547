import { logLoss } from "./logistic";
import type { ResolvedOptions } from "./options";
import { readLogit } from "./reading";
import type { Rule, RuleLearned } from "./rule";
import { createSecondOrder, type SecondOrderSettings } from "./second-order";
import type { PartReading, Reading } from "./types";

/** After each label this part of the weight is dealt out evenly, so that no expert is ever written off. */
const FIXED_SHARE = 1e-4;

type Expert = Pick<
  SecondOrderSettings,
  "outcomeWeight" | "curvature" | "regularization" | "forgetting" | "atPosterior"
>;

const improper = { outcomeWeight: 0.5, forgetting: 1, atPosterior: false };
const implicit = { outcomeWeight: 0, curvature: 1, forgetting: 1, atPosterior: true };

const EXPERTS: readonly Expert[] = [
  { ...improper, curvature: 1 / 4, regularization: 0.1 },
  { ...improper, curvature: 1 / 4, regularization: 0.5 },
  { ...improper, curvature: 1 / 17, regularization: 0.02 },
  { ...implicit, regularization: 0.1 },
  { ...implicit, regularization: 0.5 },
  { ...implicit, regularization: 0.1, forgetting: 0.998 },
];

/**
 * Vovk's aggregating forecaster over six second-order rules: p = Σ w_k·p_k; after a label
 * w'_k ∝ w_k·p_k(label), w_k = (1 - share)·w'_k + share/6. For the log loss its own loss is at most that of any
 * expert k plus ln 6 + (n - 1)·ln(1/(1 - share·5/6)) (Vovk, "Aggregating strategies", 1990; fixed share: Herbster,
 * Warmuth 1998; for logistic regression: Foster et al., "Logistic regression: the importance of being improper", 2018).
 * Live certificate: the best of the experts' own plus that term; unit weights.
 */
export function createAggregate(options: ResolvedOptions): Rule {
  const { dimension, weightBound, offset } = options;
  const rules = EXPERTS.map((expert) => createSecondOrder({ ...expert, dimension, weightBound, offset }));
  const shares = rules.map(() => 1 / rules.length);
  const expertLength = rules[0]?.state().length ?? 0;
  let labels = 0;

  function reading(): Reading {
    return {
      offset,
      parts: rules.map((rule, k) => ({
        ...(rule.reading().parts[0] as PartReading),
        share: shares[k] as number,
      })),
    };
  }

  function place(x: Float64Array, out: Float64Array): void {
    rules.forEach((rule, k) => {
      rule.place(x, out.subarray(2 * k, 2 * k + 2));
    });
  }

  function learn(x: Float64Array, label: number, weight: number): RuleLearned {
    const places = new Float64Array(2 * rules.length);
    place(x, places);
    const logit = readLogit(reading(), places);
    const learned = rules.map((rule) => rule.learn(x, label, weight));
    reshare(learned.map((expert) => weight * logLoss(expert.logit, label)));
    labels += 1;
    // Exact although one expert forgets: it holds nothing back, so only its z0 must follow, not its leverage.
    const move = { u: new Float64Array(0), shift: 0, shrink: 0, drift: null, exact: true };
    return { logit, move: { ...move, parts: learned.map((expert) => expert.move) } };
  }

  /** In logarithms, so that a loss of any size leaves the shares finite. */
  function reshare(losses: readonly number[]): void {
    const logs = losses.map((loss, k) => Math.log(shares[k] as number) - loss);
    const largest = Math.max(...logs);
    const grown = logs.map((log) => Math.exp(log - largest));
    const sum = grown.reduce((total, value) => total + value, 0);
    grown.forEach((value, k) => {
      shares[k] = (1 - FIXED_SHARE) * (value / sum) + FIXED_SHARE / rules.length;
    });
  }

  function certificate(): number | null {
    const own = rules.map((rule) => rule.certificate()).filter((bound) => bound !== null);
    if (own.length === 0) return null;
    const dealt = Math.max(0, labels - 1) * -Math.log1p(-FIXED_SHARE * (1 - 1 / rules.length));
    return Math.min(...own) + Math.log(rules.length) + dealt;
  }

  return {
    place,
    reading,
    learn,
    weights() {
      const mean = new Float64Array(dimension);
      rules.forEach((rule, k) => {
        rule.weights().forEach((weight, i) => {
          mean[i] = (mean[i] as number) + (shares[k] as number) * weight;
        });
      });
      return mean;
    },
    certificate,
    freeze: () =>
      rules.flatMap((rule, k) => rule.freeze().map((part) => ({ ...part, share: shares[k] as number }))),
    state() {
      const state = new Float64Array(1 + rules.length * (1 + expertLength));
      state[0] = labels;
      state.set(shares, 1);
      rules.forEach((rule, k) => {
        state.set(rule.state(), 1 + rules.length + k * expertLength);
      });
      return state;
    },
    restore(state) {
      if (state.length !== 1 + rules.length * (1 + expertLength)) return false;
      labels = state[0] as number;
      rules.forEach((rule, k) => {
        const from = 1 + rules.length + k * expertLength;
        shares[k] = state[1 + k] as number;
        rule.restore(state.slice(from, from + expertLength));
      });
      return true;
    },
  };
}
