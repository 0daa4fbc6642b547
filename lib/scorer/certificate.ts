/**
 * Live certificate of the improper rule: regret against every θ with ‖θ‖ ≤ B and all margins, offset included,
 * within the margin bound Z is at most lambda·B² + Σδ, with
 *   δ = (s/2)·[(1 - p + v)²/(1 + hs) - v²],  v = a(2p - 1),
 * p the probability given to the label that came, s the leverage and h the curvature used.
 * For a = 1 from the proof in Jézéquel, Gaillard, Rudi (COLT 2020, arXiv 2003.08109); for a = 1/2 a refinement
 * of our own, checked numerically, not from a paper. Unit weights, no forgetting, no projection.
 */
export class Certificate {
  private total: number;
  private valid = true;

  constructor(start: number) {
    this.total = start;
  }

  add(probabilityOfLabel: number, leverage: number, curvature: number, outcomeWeight: number): void {
    const v = outcomeWeight * (2 * probabilityOfLabel - 1);
    const gap = 1 - probabilityOfLabel + v;
    this.total += (leverage / 2) * ((gap * gap) / (1 + curvature * leverage) - v * v);
  }

  /** From here on nothing is promised. */
  withdraw(): void {
    this.valid = false;
  }

  value(): number | null {
    return this.valid ? this.total : null;
  }

  static readonly stateLength = 2;

  write(state: Float64Array, from: number): void {
    state[from] = this.total;
    state[from + 1] = this.valid ? 1 : 0;
  }

  read(state: Float64Array, from: number): void {
    this.total = state[from] as number;
    this.valid = state[from + 1] === 1;
  }
}
