import { createRule } from "./create-rule";
import { LabelError, SnapshotError } from "./errors";
import { logLoss, probabilityOf } from "./logistic";
import { ownOptions, type ResolvedOptions, resolveOptions } from "./options";
import { readLeverage, readLogit, readRawEvidence } from "./reading";
import type { Rule } from "./rule";
import { freezeScorecard } from "./scorecard";
import { decodeSnapshot, encodeSnapshot } from "./snapshot";
import type {
  Explanation,
  Label,
  Learned,
  Placed,
  Reading,
  Score,
  Scorecard,
  Scorer,
  ScorerOptions,
} from "./types";
import { checkVector, withinLength } from "./vector";

/** Keeps every step within the range of a double; useful weights are far smaller. */
const LARGEST_WEIGHT = 1e6;

/** An untrained scorer. Errors: OptionsError naming the option. */
export function createScorer(options: ScorerOptions): Scorer {
  const resolved = resolveOptions(options);
  return new RuleScorer(resolved, createRule(resolved), 0);
}

/** The scorer whose `snapshot()` these bytes are, equal to the bit. Errors: SnapshotError. */
export function restoreScorer(bytes: Uint8Array): Scorer {
  const { options, labels, state } = decodeSnapshot(bytes);
  const rule = createRule(options);
  if (!rule.restore(state)) throw new SnapshotError("snapshot's state does not fit its options");
  return new RuleScorer(options, rule, labels);
}

class RuleScorer implements Scorer {
  constructor(
    private readonly resolved: ResolvedOptions,
    private readonly rule: Rule,
    private count: number,
  ) {}

  get method() {
    return this.resolved.method;
  }

  get dimension(): number {
    return this.resolved.dimension;
  }

  get labels(): number {
    return this.count;
  }

  get options(): Readonly<ScorerOptions> {
    return ownOptions(this.resolved);
  }

  score(x: Float64Array): Score {
    const bounded = this.bound(x);
    return this.scoreOf(bounded, bounded !== x);
  }

  explain(x: Float64Array): Explanation {
    const bounded = this.bound(x);
    const contributions = this.rule.weights();
    for (let i = 0; i < contributions.length; i++) {
      contributions[i] = (contributions[i] as number) * (bounded[i] as number);
    }
    return { ...this.scoreOf(bounded, bounded !== x), contributions };
  }

  learn(x: Float64Array, label: Label, weight = 1): Learned {
    const bounded = this.bound(x);
    if (label !== 1 && label !== -1) throw new LabelError(`label must be 1 or -1, got ${String(label)}`);
    if (!(weight >= 0 && weight <= LARGEST_WEIGHT)) {
      throw new LabelError(`weight must be between 0 and ${LARGEST_WEIGHT}, got ${weight}`);
    }
    const { logit, move } = this.rule.learn(bounded, label, weight);
    this.count += 1;
    return {
      loss: logLoss(logit, label),
      logit,
      step: { ...move, index: this.count, reading: this.rule.reading() },
    };
  }

  place(x: Float64Array): Placed {
    const vector = this.bound(x);
    return { vector, places: this.placeOf(vector) };
  }

  reading(): Reading {
    return this.rule.reading();
  }

  weights(): Float64Array {
    return this.rule.weights();
  }

  certificate(): number | null {
    return this.rule.certificate();
  }

  scorecard(): Scorecard {
    return freezeScorecard(this.rule, this.resolved, this.count);
  }

  snapshot(): Uint8Array {
    return encodeSnapshot({ options: this.resolved, labels: this.count, state: this.rule.state() });
  }

  private bound(x: Float64Array): Float64Array {
    checkVector(x, this.dimension);
    return withinLength(x, this.resolved.featureBound);
  }

  private placeOf(bounded: Float64Array): Float64Array {
    const places = new Float64Array(2 * this.rule.reading().parts.length);
    this.rule.place(bounded, places);
    return places;
  }

  private scoreOf(bounded: Float64Array, scaled: boolean): Score {
    const reading = this.rule.reading();
    const places = this.placeOf(bounded);
    const logit = readLogit(reading, places);
    const rawEvidence = readRawEvidence(reading, places);
    return {
      logit,
      probability: probabilityOf(logit),
      leverage: readLeverage(reading, places),
      rawEvidence,
      pull: logit - reading.offset - rawEvidence,
      offset: reading.offset,
      scaled,
    };
  }
}
