import type { DemoPerson } from "@/db/demo/people";
import type { Role } from "@/lib/auth/codes";
import signIns from "../../db/demo/sign-ins.json" with { type: "json" };

export const DEMO_PEOPLE = signIns as readonly DemoPerson[];

/** The first of the demo's people with this role, whom the sign-in page offers. */
export function demoPerson(role: Role): DemoPerson {
  const person = DEMO_PEOPLE.find((each) => each.role === role);
  if (!person) throw new Error(`The demo has no ${role}`);
  return person;
}
