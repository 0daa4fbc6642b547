import type { Rule } from "./rule";

/**
 * A rule with linear scores that also keeps the mean of its weights as they stood before each label:
 * mean += (m - mean)/t. By convexity the averaged weights carry the rule's regret over to new cases
 * (Cesa-Bianchi, Conconi, Gentile, "On the generalization ability of on-line learning algorithms", 2004).
 */
export function withAverage(rule: Rule, dimension: number): Rule {
  const average = new Float64Array(dimension);
  let labels = 0;
  return {
    ...rule,
    learn(x, label, weight) {
      labels += 1;
      const weights = rule.weights();
      for (let i = 0; i < dimension; i++) {
        const mean = average[i] as number;
        average[i] = mean + ((weights[i] as number) - mean) / labels;
      }
      return rule.learn(x, label, weight);
    },
    averagedWeights: () => average.slice(),
    state() {
      const own = rule.state();
      const state = new Float64Array(own.length + dimension + 1);
      state.set(own);
      state.set(average, own.length);
      state[own.length + dimension] = labels;
      return state;
    },
    restore(state) {
      const end = state.length - dimension - 1;
      if (end < 0 || !rule.restore(state.subarray(0, end))) return false;
      average.set(state.subarray(end, end + dimension));
      labels = state[end + dimension] as number;
      return true;
    },
  };
}
