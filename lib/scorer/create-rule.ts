import { createAggregate } from "./aggregate";
import { withAverage } from "./averaged";
import { createGradient } from "./gradient";
import { createLeader } from "./leader";
import { createNewton } from "./newton";
import type { ResolvedOptions } from "./options";
import type { Rule } from "./rule";
import { createSecondOrder } from "./second-order";

/** The rule that the options name, untrained. Errors: OptionsError. */
export function createRule(options: ResolvedOptions): Rule {
  switch (options.method) {
    case "improper":
      return createSecondOrder({
        ...options,
        curvature: 1 / (1 + options.outcomeWeight * options.marginBound),
        atPosterior: false,
      });
    case "aggregate":
      return createAggregate(options);
    default:
      return withAverage(createLinear(options), options.dimension);
  }
}

/** The rules that predict m·x itself. */
function createLinear(options: ResolvedOptions): Rule {
  switch (options.method) {
    case "gradient":
      return createGradient(options);
    case "newton":
      return createNewton(options);
    case "leader":
      return createLeader(options);
    default:
      return createSecondOrder({
        ...options,
        outcomeWeight: 0,
        curvature: 1,
        atPosterior: options.linearization === "posterior",
      });
  }
}
