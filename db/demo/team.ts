import type { Role } from "@/lib/auth/codes";
import { hashPassword } from "@/lib/auth/password";
import type { Context, PersonActor } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { people, personRoles } from "../schema/people";
import { DEMO_PEOPLE } from "./people";

export const TIME_ZONE = "Europe/Dublin";

export type Team = Record<Role, PersonActor[]>;

/** Enters the demo's people with their published password. */
export async function enterTeam(ctx: Context): Promise<Team> {
  const team: Team = { reviewer: [], supervisor: [], risk_manager: [], auditor: [], administrator: [] };
  const createdAt = ctx.now();
  for (const { id, name, email, password, role } of DEMO_PEOPLE) {
    const passwordHash = await hashPassword(password);
    await ctx.db.insert(people).values({ id, name, email, passwordHash, timeZone: TIME_ZONE, createdAt });
    await ctx.db.insert(personRoles).values({ personId: id, role, grantedAt: createdAt });
    team[role].push({ kind: "person", personId: id, name, roles: [role], timeZone: TIME_ZONE, key: null });
  }
  return team;
}

export type Clock = {
  now: () => Date;
  set: (at: Date) => void;
};

export function clockFrom(start: Date): Clock {
  let current = start;
  return {
    now: () => current,
    // Never backwards: what happened stays in the order in which it is told.
    set: (at) => {
      if (at > current) current = at;
    },
  };
}

export const contextAt = (ctx: Context, actor: Context["actor"], clock: Clock): Context => ({
  ...ctx,
  actor,
  now: clock.now,
  requestId: newId(),
});
