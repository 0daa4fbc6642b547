import { type Scorecard, scoreByCard } from "../scorer";
import { CATALOGUE, DIMENSION, OFFSETS } from "../signals/catalogue";
import { FORMULA_FIELDS } from "../signals/formula-fields";
import { compileFormula } from "../signals/own-formula";
import type { Signal } from "../signals/signal";
import type { OwnDefinition, SignalSet } from "../signals/signal-set";
import type { ScorecardView } from "./scorecard-schema";

const EVALUATION = [
  "Build the vector x of length `dimension`: every coordinate of every signal by its formula from its measure v, the coordinate at `biasIndex` always 1, and 0 wherever nothing is said. A signal of which a field it needs is missing has 0 in all its coordinates.",
  "If the Euclidean length of x is above `featureBound`, multiply x by featureBound / length.",
  "For each part: z₀ = Σ weights[i]·x[i], and s = Σᵢ Σⱼ P[i][j]·x[i]·x[j] with P from `triangle`; s = 0 where `triangle` is null.",
  "For each part: its log-odds w solve w + outcomeWeight·s·tanh(w/2) = offset + z₀. The solution is unique, has the sign of the right side and lies no farther from 0; without s it is the right side itself.",
  "The probability is Σ share·1/(1 + exp(−w)) over the parts; the log-odds of the score are ln(p/(1 − p)). With one part they are w.",
];

const NAMES = {
  "clip(x)": "max(−1, min(1, x))",
  "max(x, y)": "the larger of the two",
  "ln(x)": "natural logarithm; of 0 it is −∞",
  "logit(x)": "ln(x) − ln(1 − x)",
};

export type CardSubject = {
  name: string;
  version: number;
  method: ScorecardView["scorer"]["method"];
  signals: SignalSet;
};

/**
 * A frozen scorer as a payment system takes it.
 * @param example a stored vector of the scorer's dimension
 */
export function scorecardView(
  { name, version, method, signals }: CardSubject,
  card: Scorecard,
  example: Float64Array | null,
  exportedAt: Date,
): ScorecardView {
  const own = signals.own.filter(({ isOn }) => isOn);
  const { kind, guarantee, certificate, labels, featureBound, offset } = card;
  return {
    format: 1,
    exportedAt: exportedAt.toISOString(),
    scorer: { name, version, method, labels },
    signalSetVersion: signals.version,
    kind,
    guarantee,
    certificate,
    regretPerLabel: kind === "averaged" && certificate !== null && labels > 0 ? certificate / labels : null,
    evaluation: EVALUATION,
    functions: NAMES,
    formulaFields: Object.fromEntries(
      own.length === 0 ? [] : FORMULA_FIELDS.map(({ name, sentence }) => [name, sentence]),
    ),
    dimension: signals.dimension,
    biasIndex: DIMENSION - 1,
    featureBound,
    offset,
    parts: card.parts,
    signals: [...CATALOGUE.map(catalogueSignal), ...own.map(ownSignal)],
    example: example && exampleOf(card, example),
  };
}

function catalogueSignal(signal: Signal, at: number): ScorecardView["signals"][number] {
  const { key, name, sentence, needs } = signal;
  const coordinates = signal.parts.flatMap(({ measure, scales }) =>
    scales.map(({ formula }, n) => ({
      measure,
      formula,
      role: n === 0 ? ("scale" as const) : ("hinge" as const),
    })),
  );
  const from = OFFSETS[at] as number;
  return {
    key,
    name,
    sentence,
    source: "catalogue",
    needs: [...needs],
    coordinates: coordinates.map((coordinate, n) => ({ index: from + n, ...coordinate })),
  };
}

function ownSignal(signal: OwnDefinition): ScorecardView["signals"][number] {
  const { key, name, sentence, formula, middle, reach, position } = signal;
  return {
    key,
    name,
    sentence,
    source: "own",
    needs: [...(compileFormula(formula).formula?.needs ?? [])],
    coordinates: [
      {
        index: DIMENSION + position,
        measure: formula,
        formula: `clip((v − ${middle}) / ${reach})`,
        role: "scale",
      },
    ],
  };
}

function exampleOf(card: Scorecard, vector: Float64Array): ScorecardView["example"] {
  const { logit, probability, parts } = scoreByCard(card, vector);
  return {
    coordinates: [...vector],
    parts: parts.map(({ rawEvidence, leverage, logit }) => ({
      evidence: rawEvidence,
      leverage,
      logOdds: logit,
    })),
    logOdds: logit,
    probability,
  };
}
