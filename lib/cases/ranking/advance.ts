import "server-only";
import { Breath } from "../../breath";
import type { Scorer, Step } from "../../scorer";
import { countMove, type Movement, noMovement } from "./movement";
import type { WaitingCases } from "./waiting-cases";

/** Cases brought forward without a pause: a millisecond or two. */
const CHUNK = 2_000;
const CHUNK_RECOMPUTED = 200;

/**
 * Brings every case forward by the labels of one act, O(d) a case and label, and publishes the new scores.
 * The caller holds off everybody else until it is done.
 * @throws StepError when a step is not exact; then `recompute`
 */
export async function advance(
  cases: WaitingCases,
  steps: readonly Step[],
  holdLogit: number,
): Promise<Movement> {
  const { waiting } = cases;
  const movement = noMovement();
  const last = steps.at(-1);
  if (!last) return movement;
  const breath = new Breath();
  for (let from = 0; from < waiting.end; from += CHUNK) {
    const to = Math.min(from + CHUNK, waiting.end);
    for (const step of steps) waiting.advanceRange(step, from, to);
    waiting.rootsRange(last.reading, from, to);
    publish(cases, from, to, holdLogit, movement);
    await breath.take();
  }
  return movement;
}

/** Computes every case anew, O(d²) each, and publishes the scores together at the end. */
export async function recompute(cases: WaitingCases, scorer: Scorer, holdLogit: number): Promise<Movement> {
  const { waiting } = cases;
  const movement = noMovement();
  const breath = new Breath();
  for (let from = 0; from < waiting.end; from += CHUNK_RECOMPUTED) {
    waiting.recomputeRange(scorer, from, from + CHUNK_RECOMPUTED);
    await breath.take();
  }
  publish(cases, 0, waiting.end, holdLogit, movement);
  return movement;
}

function publish(cases: WaitingCases, from: number, to: number, holdLogit: number, movement: Movement): void {
  const { waiting, published } = cases;
  const { logits } = waiting;
  for (let slot = from; slot < to; slot++) {
    if (!waiting.holds(slot)) continue;
    const after = logits[slot] as number;
    countMove(movement, published[slot] as number, after, holdLogit);
    published[slot] = after;
  }
}
