import "server-only";
import { DEMO_PEOPLE } from "@/db/demo/people";
import { environment } from "../env";
import type { Role } from "./codes";

export type DemoSignIn = { role: Role; name: string; email: string; password: string };

/** What the sign-in form offers as buttons; nothing outside the demo. */
export function listDemoSignIns(): DemoSignIn[] {
  if (environment().CUPEL_DEMO !== "1") return [];
  return DEMO_PEOPLE.map(({ role, name, email, password }) => ({ role, name, email, password }));
}
