/** A fixed map of a measure onto [−1, 1] and back. */
export type Scale = {
  /** Formula with the measure as v. */
  formula: string;
  toUnit: (value: number) => number;
  /** The measure that a coordinate stands for; exact but for rounding where the coordinate lies inside (−1, 1). */
  fromUnit: (coordinate: number) => number;
  /** The measure cannot lie beyond the scale's ends. */
  isWhole?: true;
};

function clip(x: number, low: number, high: number): number {
  return Math.max(low, Math.min(high, x));
}

/** `typical` maps to 0 and `high` to 1, on a logarithm of 1 + v: for counts, amounts and times, which spread over powers of ten. */
export function logScale(typical: number, high: number): Scale {
  const centre = Math.log1p(typical);
  const span = Math.log1p(high) - centre;
  return {
    formula: `clip((ln(1 + v) − ln(1 + ${typical})) / (ln(1 + ${high}) − ln(1 + ${typical})))`,
    toUnit: (value) => clip((Math.log1p(value) - centre) / span, -1, 1),
    fromUnit: (coordinate) => Math.expm1(centre + coordinate * span),
  };
}

/** For ratios: 1 maps to 0, `high` to 1 and 1/`high` to −1. */
export function ratioScale(high: number): Scale {
  const span = Math.log(high);
  return {
    formula: `clip(ln(v) / ln(${high}))`,
    toUnit: (value) => (value <= 0 ? -1 : clip(Math.log(value) / span, -1, 1)),
    fromUnit: (coordinate) => Math.exp(coordinate * span),
  };
}

/** For shares of known fraud: the share's log odds, `typical` to 0 and `high` to 1. */
export function oddsScale(typical: number, high: number): Scale {
  const logit = (share: number) => Math.log(share) - Math.log1p(-share);
  const span = logit(high) - logit(typical);
  return {
    formula: `clip((logit(v) − logit(${typical})) / (logit(${high}) − logit(${typical})))`,
    toUnit: (value) => clip((logit(value) - logit(typical)) / span, -1, 1),
    fromUnit: (coordinate) => 1 / (1 + Math.exp(-(logit(typical) + coordinate * span))),
  };
}

/** For measures that lie in [−1, 1] by themselves. */
export const asItIs: Scale = {
  formula: "v",
  toUnit: (value) => clip(value, -1, 1),
  fromUnit: (coordinate) => coordinate,
  isWhole: true,
};

/** A straight line for shares, with `typical` at 0 and the farther end of [0, 1] at 1 or −1. */
export function shareScale(typical: number): Scale {
  const span = Math.max(typical, 1 - typical);
  return {
    formula: `(v − ${typical}) / ${span}`,
    toUnit: (value) => (value - typical) / span,
    fromUnit: (coordinate) => typical + coordinate * span,
    isWhole: true,
  };
}

/**
 * A hinge: 0 up to `from`, then max(v − from, 0) on a logarithm, 1 from `to` on. A straight line through all values
 * would miss the thresholds that fraud has.
 */
export type Hinge = { from: number; to: number };

export function hingeScale({ from, to }: Hinge): Scale {
  const start = Math.log1p(from);
  const span = Math.log1p(to) - start;
  return {
    formula: `clip(max(ln(1 + v) − ln(1 + ${from}), 0) / (ln(1 + ${to}) − ln(1 + ${from})))`,
    toUnit: (value) => clip((Math.log1p(value) - start) / span, 0, 1),
    fromUnit: (coordinate) => Math.expm1(start + coordinate * span),
  };
}
