/**
 * A payment system's own evaluation of a scorecard, written from the exported text alone: `evaluation` for the score,
 * `functions` for the formulas. It shares no code with the product, and solves by halving what the product solves by
 * Newton's method.
 */
export type CardJson = {
  dimension: number;
  biasIndex: number;
  featureBound: number;
  offset: number;
  parts: { share: number; weights: number[]; outcomeWeight: number; triangle: number[] | null }[];
  signals: {
    key: string;
    needs: string[];
    coordinates: { index: number; measure: string; formula: string }[];
  }[];
};

export function scoreFromText(
  card: CardJson,
  coordinates: readonly number[],
): { logOdds: number; probability: number } {
  const length = Math.sqrt(coordinates.reduce((sum, entry) => sum + entry ** 2, 0));
  const factor = length > card.featureBound ? card.featureBound / length : 1;
  const x = coordinates.map((entry) => entry * factor);
  const logOdds = card.parts.map((part) => {
    const z0 = part.weights.reduce((sum, weight, i) => sum + weight * (x[i] ?? 0), 0);
    return solve(card.offset + z0, part.outcomeWeight * leverage(part.triangle, x));
  });
  if (logOdds.length === 1) {
    const [w = 0] = logOdds;
    return { logOdds: w, probability: 1 / (1 + Math.exp(-w)) };
  }
  let probability = 0;
  let other = 0;
  card.parts.forEach(({ share }, k) => {
    probability += share / (1 + Math.exp(-(logOdds[k] ?? 0)));
    other += share / (1 + Math.exp(logOdds[k] ?? 0));
  });
  return { logOdds: Math.log(probability / other), probability };
}

function leverage(triangle: number[] | null, x: number[]): number {
  if (!triangle) return 0;
  let sum = 0;
  for (let i = 0; i < x.length; i++) {
    for (let j = 0; j < x.length; j++) {
      const [row, column] = i >= j ? [i, j] : [j, i];
      sum += (triangle[(row * (row + 1)) / 2 + column] ?? 0) * (x[i] ?? 0) * (x[j] ?? 0);
    }
  }
  return sum;
}

/** w with w + pull·tanh(w/2) = right. */
function solve(right: number, pull: number): number {
  let low = -Math.abs(right);
  let high = Math.abs(right);
  for (let n = 0; n < 200; n++) {
    const middle = (low + high) / 2;
    if (middle + pull * Math.tanh(middle / 2) < right) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Value of a formula of the card for a measure v. */
export function formulaValue(formula: string, v: number): number {
  const tokens = formula.match(/\d+(\.\d+)?(e-?\d+)?|[a-z]+|[-−+*/(),]/g) ?? [];
  let at = 0;
  const next = () => tokens[at++] ?? "";
  const sum = (): number => {
    let value = product();
    while (tokens[at] === "+" || tokens[at] === "−") value += next() === "+" ? product() : -product();
    return value;
  };
  const product = (): number => {
    let value = factor();
    while (tokens[at] === "/" || tokens[at] === "*")
      value = next() === "/" ? value / factor() : value * factor();
    return value;
  };
  const factor = (): number => {
    const token = next();
    if (token === "−" || token === "-") return -factor();
    if (token === "(") return closed(sum());
    if (token === "v") return v;
    if (/^\d/.test(token)) return Number(token);
    next();
    const values = [sum()];
    while (tokens[at] === ",") {
      next();
      values.push(sum());
    }
    return call(token, closedValues(values));
  };
  const closed = (value: number) => {
    next();
    return value;
  };
  const closedValues = (values: number[]) => {
    next();
    return values;
  };
  const value = sum();
  if (at !== tokens.length) throw new Error(`Not all of "${formula}" was read`);
  return value;
}

function call(name: string, [x = Number.NaN, y = Number.NaN]: number[]): number {
  switch (name) {
    case "clip":
      return Math.max(-1, Math.min(1, x));
    case "max":
      return Math.max(x, y);
    case "ln":
      return Math.log(x);
    case "logit":
      return Math.log(x) - Math.log(1 - x);
    default:
      throw new Error(`The card says nothing of ${name}`);
  }
}
