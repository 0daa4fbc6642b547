import { parseArgs } from "node:util";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import type { Context } from "@/lib/context";
import { notFound } from "@/lib/errors";
import { addPerson } from "@/lib/people/add";
import { resetPassword } from "@/lib/people/reset-password";
import { AddPersonInput, SetRolesInput } from "@/lib/people/schema";
import { setRoles } from "@/lib/people/set-roles";
import { deactivatePerson, reactivatePerson } from "@/lib/people/set-state";
import { checked, listed, runOnDatabase, UsageError } from "./command-line";

const USAGE = `usage: npm run person -- add <email> --name <name> --roles <role,…> [--time-zone <zone>]
       npm run person -- roles <email> --roles <role,…>
       npm run person -- reset <email>
       npm run person -- deactivate <email>
       npm run person -- reactivate <email>
roles: reviewer, supervisor, risk_manager, auditor, administrator`;

await runOnDatabase(USAGE, async (ctx, args) => {
  const { values, positionals } = parseArgs({
    args,
    allowPositionals: true,
    options: { name: { type: "string" }, roles: { type: "string" }, "time-zone": { type: "string" } },
  });
  const [act, email, ...rest] = positionals;
  if (!act || !email || rest.length > 0) throw new UsageError("An act and one e-mail address are needed.");
  const { name, roles, "time-zone": timeZone } = values;
  switch (act) {
    case "add": {
      const given = { email, name, roles: listed(roles), ...(timeZone && { timeZone }) };
      const { person, oneTimePassword } = await addPerson(ctx, checked(AddPersonInput, given));
      return [`Added ${person.email} (${person.roles.join(", ")}).`, `One-time password: ${oneTimePassword}`];
    }
    case "roles": {
      const given = { id: await idOf(ctx, email), roles: listed(roles) };
      const person = await setRoles(ctx, checked(SetRolesInput, given));
      return [`${person.email} is now ${person.roles.join(", ")}.`];
    }
    case "reset": {
      const { oneTimePassword } = await resetPassword(ctx, { id: await idOf(ctx, email) });
      return [`One-time password: ${oneTimePassword}`];
    }
    case "deactivate":
      return [`${(await deactivatePerson(ctx, { id: await idOf(ctx, email) })).email} is deactivated.`];
    case "reactivate":
      return [`${(await reactivatePerson(ctx, { id: await idOf(ctx, email) })).email} is active.`];
    default:
      throw new UsageError(`There is no “${act}”.`);
  }
});

async function idOf(ctx: Context, email: string): Promise<string> {
  const [person] = await ctx.db
    .select({ id: people.id })
    .from(people)
    .where(eq(people.email, email.toLowerCase()));
  if (!person) throw notFound(`A person with the address ${email}`);
  return person.id;
}
