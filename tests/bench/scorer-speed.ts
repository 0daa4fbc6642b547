import { createScorer, createWaiting, type Label, type ScorerOptions } from "../../lib/scorer";
import { drawLabelled, type Labelled } from "../scorer/fixture";
import type { Row } from "../support/bench";

const WAITING = 100_000;
/** Slots brought forward before the event loop gets its turn. */
const CHUNK = 4096;
/** A case computed afresh costs O(d²) instead of O(d), so fewer at a time. */
const AFRESH_CHUNK = 512;
/** Entries this small keep vectors within the default feature bound, and weights within theirs. */
const SCALE = 0.5;

const RULES: { name: string; options: Omit<ScorerOptions, "dimension">; limitMicros?: number }[] = [
  { name: "improper half", options: { method: "improper" }, limitMicros: 20 },
  {
    name: "improper full",
    options: { outcomeWeight: 1, regularization: 0.1, weightBound: 1e3, marginBound: 32 },
    limitMicros: 20,
  },
  { name: "improper half, projected at nearly every label", options: { method: "improper", weightBound: 2 } },
  { name: "implicit", options: { method: "implicit" }, limitMicros: 20 },
  { name: "newton", options: { method: "newton", weightBound: 1e3 }, limitMicros: 20 },
  { name: "newton, projected at nearly every label", options: { method: "newton", weightBound: 2 } },
  { name: "gradient", options: { method: "gradient" } },
  { name: "aggregate of six", options: { method: "aggregate" } },
  // Its refits pass over all labels so far: a line to compare with, not a rule for years of labels.
  { name: "leader, every 50 of 2,000 labels", options: { method: "leader" } },
];

/** What the scorer's speed comes to, each figure beside its limit or a peer of the same run. */
export async function run(): Promise<Row[]> {
  const stream = drawLabelled(WAITING, 64, 64, SCALE);
  const rows: Row[] = [];
  for (const dimension of [32, 64]) {
    for (const rule of RULES) rows.push(predictAndUpdate(rule, dimension));
  }
  rows.push(...waitingRows(stream.vectors), replayRow(stream));
  for (const row of rows)
    console.log(`${row.ok ? "ok " : "BAD"} ${row.name}: ${row.measured} (${row.limit})`);
  return rows;
}

function predictAndUpdate({ name, options, limitMicros }: (typeof RULES)[number], dimension: number): Row {
  const { vectors, labels } = drawLabelled(2000, dimension, dimension, SCALE);
  const scorer = createScorer({ dimension, ...options });
  // The leader keeps every vector, so its rounds would grow; one of a fresh scorer tells.
  const rounds = options.method === "leader" ? 1 : 5;
  const round = () => {
    vectors.forEach((x, n) => {
      scorer.score(x);
      scorer.learn(x, labels[n] as Label);
    });
  };
  if (rounds > 1) round();
  const micros = median(rounds, () => elapsedMs(round)) * (1000 / vectors.length);
  return {
    name: `predict + update, ${name}, d = ${dimension}`,
    measured: `${micros.toFixed(2)} µs`,
    limit: limitMicros ? `at most ${limitMicros} µs` : "no limit set",
    ok: limitMicros === undefined || micros <= limitMicros,
  };
}

function waitingRows(vectors: readonly Float64Array[]): Row[] {
  const scorer = createScorer({ dimension: 64 });
  const waiting = createWaiting(64, vectors.length);
  for (const x of vectors.slice(0, 500)) scorer.learn(x, 1);
  for (const x of vectors) waiting.add(x, scorer);
  let longest = 0;
  const bringForward = (n: number): number => {
    const { step } = scorer.learn(vectors[n] as Float64Array, n % 9 === 0 ? 1 : -1);
    const took = inChunks(waiting.end, CHUNK, (from, to) => {
      waiting.advanceRange(step, from, to);
      waiting.rootsRange(step.reading, from, to);
    });
    longest = Math.max(longest, took.longest);
    return took.total;
  };
  for (let n = 0; n < 5; n++) bringForward(n);
  longest = 0;
  let n = 5;
  const forward = median(15, () => bringForward(n++));
  const flat = Float64Array.from({ length: vectors.length * 64 }, (_, i) => i % 7);
  const pass = median(15, () => elapsedMs(() => sumOf(flat)));
  const afresh = inChunks(waiting.end, AFRESH_CHUNK, (from, to) => waiting.recomputeRange(scorer, from, to));
  const name = `${vectors.length} waiting cases, d = 64`;
  return [
    {
      name: `${name}: brought forward by one label, roots included`,
      measured: `${forward.toFixed(1)} ms`,
      limit: `at most 40 ms; one plain pass over their vectors takes ${pass.toFixed(1)} ms`,
      ok: forward <= 40,
    },
    {
      name: `${name}: longest hold of the event loop, in chunks of ${CHUNK}`,
      measured: `${longest.toFixed(1)} ms`,
      limit: "at most 20 ms",
      ok: longest <= 20,
    },
    {
      name: `${name}: computed afresh`,
      measured: `${afresh.total.toFixed(0)} ms`,
      limit: "no limit set; in slices, others have their turn in between",
      ok: true,
    },
    {
      name: `${name}: longest hold while computed afresh, in slices of ${AFRESH_CHUNK}`,
      measured: `${afresh.longest.toFixed(1)} ms`,
      limit: "at most 20 ms",
      ok: afresh.longest <= 20,
    },
  ];
}

function replayRow({ vectors, labels }: Labelled): Row {
  const scorer = createScorer({ dimension: 64 });
  const took = elapsedMs(() => {
    vectors.forEach((x, n) => {
      scorer.learn(x, labels[n] as Label);
    });
  });
  return {
    name: `replay of ${vectors.length} labels, improper, d = 64`,
    measured: `${(took / 1000).toFixed(2)} s`,
    limit: "at most 3 s",
    ok: took <= 3000,
  };
}

function inChunks(end: number, size: number, work: (from: number, to: number) => void) {
  let [total, longest] = [0, 0];
  for (let from = 0; from < end; from += size) {
    const took = elapsedMs(() => work(from, from + size));
    longest = Math.max(longest, took);
    total += took;
  }
  return { total, longest };
}

function sumOf(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i] as number;
  return sum;
}

function elapsedMs(work: () => unknown): number {
  const start = performance.now();
  work();
  return performance.now() - start;
}

function median(count: number, measure: () => number): number {
  const values = Array.from({ length: count }, measure).sort((a, b) => a - b);
  return values[Math.floor(count / 2)] as number;
}
