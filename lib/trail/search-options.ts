import "server-only";
import { asc } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { demand } from "../auth/demand";
import type { Context } from "../context";

export type SearchOptions = { acts: string[]; people: { id: string; name: string }[] };

/** What a search can be narrowed to: acts that occur, and everybody who ever had an account. */
export async function readSearchOptions(ctx: Context): Promise<SearchOptions> {
  demand(ctx, "trail.read");
  const [acts, everybody] = await Promise.all([
    ctx.db.selectDistinct({ act: trail.act }).from(trail).orderBy(asc(trail.act)),
    ctx.db.select({ id: people.id, name: people.name }).from(people).orderBy(asc(people.name)),
  ]);
  return { acts: acts.map(({ act }) => act), people: everybody };
}
