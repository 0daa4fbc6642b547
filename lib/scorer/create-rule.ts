import { OptionsError } from "./errors";
import type { ResolvedOptions } from "./options";
import type { Rule } from "./rule";
import { createSecondOrder } from "./second-order";

/** The rule that the options name, untrained. */
export function createRule(options: ResolvedOptions): Rule {
  switch (options.method) {
    case "improper":
      return createSecondOrder({
        ...options,
        curvature: 1 / (1 + options.outcomeWeight * options.marginBound),
        atPosterior: false,
      });
    case "implicit":
      return createSecondOrder({
        ...options,
        outcomeWeight: 0,
        curvature: 1,
        atPosterior: options.linearization === "posterior",
      });
    default:
      throw new OptionsError(`method ${options.method} is not built yet`);
  }
}
