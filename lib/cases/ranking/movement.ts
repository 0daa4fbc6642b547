import { decibansToNats } from "../../decibans";

/** What a label did to the waiting cases. */
export type Movement = { up: number; down: number; aboveHoldLine: number; belowHoldLine: number };

/** A smaller change is no movement that anybody could see. */
const LEAST_MOVE_NATS = decibansToNats(1);

export const noMovement = (): Movement => ({ up: 0, down: 0, aboveHoldLine: 0, belowHoldLine: 0 });

/** Counts one case in; log-odds in nats. */
export function countMove(movement: Movement, before: number, after: number, holdLogit: number): void {
  if (after - before >= LEAST_MOVE_NATS) movement.up += 1;
  else if (before - after >= LEAST_MOVE_NATS) movement.down += 1;
  if (before < holdLogit && after >= holdLogit) movement.aboveHoldLine += 1;
  else if (before >= holdLogit && after < holdLogit) movement.belowHoldLine += 1;
}

const MOST_KEPT = 500;

/** What the last labels moved, by the scorer's version, for those who ask a moment later. */
export class KeptMovements {
  private readonly byVersion = new Map<number, Movement>();

  /** One act, or one fresh computation, may have led over several versions. */
  keep(fromVersion: number, toVersion: number, movement: Movement): void {
    for (let version = Math.max(fromVersion, toVersion - MOST_KEPT); version <= toVersion; version++) {
      this.byVersion.set(version, movement);
    }
    for (const version of this.byVersion.keys()) {
      if (this.byVersion.size <= MOST_KEPT) break;
      this.byVersion.delete(version);
    }
  }

  of(version: number): Movement | null {
    return this.byVersion.get(version) ?? null;
  }
}
