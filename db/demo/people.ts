import { z } from "zod";
import { ROLES } from "../../lib/auth/codes";
import signIns from "./sign-ins.json";

const DemoPerson = z.strictObject({
  id: z.uuid(),
  role: z.enum(ROLES),
  name: z.string(),
  email: z.email(),
  password: z.string(),
});
export type DemoPerson = z.infer<typeof DemoPerson>;

/** Invented people of the demo, one role each; their password is published, so they exist in the demo only. */
export const DEMO_PEOPLE: readonly DemoPerson[] = z.array(DemoPerson).parse(signIns);
