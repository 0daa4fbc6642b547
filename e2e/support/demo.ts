import type { DemoPerson } from "@/db/demo/people";
import type { Role } from "@/lib/auth/codes";
import signIns from "../../db/demo/sign-ins.json" with { type: "json" };

const DEMO_PEOPLE = signIns as readonly DemoPerson[];

/** One of the demo's people with this role, whom the sign-in page offers. */
export function demoPerson(role: Role, index = 0): DemoPerson {
  const person = DEMO_PEOPLE.filter((each) => each.role === role)[index];
  if (!person) throw new Error(`The demo has no such ${role}`);
  return person;
}
