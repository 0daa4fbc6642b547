import { parseArgs } from "node:util";
import { eq } from "drizzle-orm";
import { apiKeys, people } from "@/db/schema/people";
import type { Context } from "@/lib/context";
import { notFound } from "@/lib/errors";
import { addKey } from "@/lib/keys/add";
import { revokeKey } from "@/lib/keys/revoke";
import { AddKeyInput } from "@/lib/keys/schema";
import { checked, listed, runOnDatabase, UsageError } from "./command-line";

const USAGE = `usage: npm run key -- add <name> --scopes <scope,…> [--source <source>] [--as <email>]
       npm run key -- revoke <name>
scopes: transactions:write, outcomes:write, cases:read, cases:decide, policy:write, reports:read
The source is the namespace of the sender's identifiers; without it, the key's name in small letters.
cases:decide and policy:write act for the person that --as names.`;

await runOnDatabase(USAGE, async (ctx, args) => {
  const { values, positionals } = parseArgs({
    args,
    allowPositionals: true,
    options: { scopes: { type: "string" }, source: { type: "string" }, as: { type: "string" } },
  });
  const [act, name, ...rest] = positionals;
  if (!act || !name || rest.length > 0) throw new UsageError("An act and one name are needed.");
  switch (act) {
    case "add": {
      const source = values.source ?? name.toLowerCase().replace(/[^a-z0-9._-]+/g, "-");
      const actsForPersonId = values.as ? await personIdOf(ctx, values.as) : undefined;
      const given = {
        name,
        source,
        scopes: listed(values.scopes),
        ...(actsForPersonId && { actsForPersonId }),
      };
      const { key, secret } = await addKey(ctx, checked(AddKeyInput, given));
      return [
        `Added the key ${key.name} of source ${key.source} (${key.scopes.join(", ")}).`,
        `Key: ${secret}`,
      ];
    }
    case "revoke":
      return [`The key ${(await revokeKey(ctx, { id: await keyIdOf(ctx, name) })).name} is revoked.`];
    default:
      throw new UsageError(`There is no “${act}”.`);
  }
});

async function personIdOf(ctx: Context, email: string): Promise<string> {
  const [person] = await ctx.db
    .select({ id: people.id })
    .from(people)
    .where(eq(people.email, email.toLowerCase()));
  if (!person) throw notFound(`A person with the address ${email}`);
  return person.id;
}

async function keyIdOf(ctx: Context, name: string): Promise<string> {
  const [key] = await ctx.db.select({ id: apiKeys.id }).from(apiKeys).where(eq(apiKeys.name, name));
  if (!key) throw notFound(`A key named ${name}`);
  return key.id;
}
