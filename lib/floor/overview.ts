import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { floorView } from "./read";
import type { FloorView } from "./schema";

/** The floor as the asker sees it: today is their own day. */
export async function readFloor(ctx: Context): Promise<FloorView> {
  demand(ctx, "floor.read");
  return floorView(ctx.db, ctx.now(), ctx.actor.kind === "person" ? ctx.actor.timeZone : "UTC");
}
