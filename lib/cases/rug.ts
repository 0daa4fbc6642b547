import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { natsToDecibans } from "../decibans";
import { policyInForce } from "../policy/read";
import { rankingOf } from "./ranking/ranking";
import type { RugView } from "./schema";
import { readerOf } from "./visibility";

/** Finer than a tick on any screen is wide, and a third of the bytes. */
const TICKS_PER_DECIBAN = 100;

/** Evidence of every waiting case this person may see, in the policy's order. */
export async function readRug(ctx: Context): Promise<RugView> {
  demand(ctx, "cases.read");
  const reader = readerOf(ctx.actor);
  const { terms } = await policyInForce(ctx.db, ctx.now());
  return rankingOf(ctx.db).read(ctx.now(), (view) => {
    const evidenceDecibans: number[] = [];
    for (let index = 0; index < view.size; index++) {
      if (terms.hideScoreUntilVerdict || !view.isSeenAt(index, reader)) continue;
      const decibans = natsToDecibans(view.logitAt(index));
      evidenceDecibans.push(Math.round(decibans * TICKS_PER_DECIBAN) / TICKS_PER_DECIBAN);
    }
    return {
      version: view.version,
      reviewDecibans: natsToDecibans(view.thresholds.reviewLogit),
      holdDecibans: natsToDecibans(view.thresholds.holdLogit),
      evidenceDecibans,
    };
  });
}
