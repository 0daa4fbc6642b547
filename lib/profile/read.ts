import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { people } from "@/db/schema/people";
import { demandPerson } from "../auth/demand";
import type { Context, PersonActor } from "../context";
import { notFound } from "../errors";
import type { ProfileView } from "./schema";

export async function readProfile(ctx: Context): Promise<ProfileView> {
  return profileOf(ctx.db, demandPerson(ctx, "account.own"));
}

export async function profileOf(db: Executor, actor: PersonActor): Promise<ProfileView> {
  const [row] = await db
    .select({ email: people.email, timeZone: people.timeZone })
    .from(people)
    .where(eq(people.id, actor.personId));
  if (!row) throw notFound("This person");
  return { id: actor.personId, name: actor.name, roles: [...actor.roles], ...row };
}
