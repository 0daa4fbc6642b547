import path from "node:path";
import { eq } from "drizzle-orm";
import { expect, test, vi } from "vitest";
import { apiKeys, people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { hashOfKey } from "@/lib/auth/key-hash";
import { projectFolder } from "../../db/server/folders.mjs";
import { runToEnd } from "../../db/server/processes.mjs";
import { testDatabase } from "../support/database";

/** Each run starts a Node of its own, which takes seconds on a busy machine. */
vi.setConfig({ testTimeout: 120_000 });

const { db, url } = await testDatabase();

/** The script as `npm run` starts it, on this test's database. */
async function run(script: string, ...args: string[]) {
  const { code, output } = await runToEnd(process.execPath, ["--import", "tsx", script, ...args], {
    cwd: projectFolder,
    quiet: true,
    env: {
      ...process.env,
      DATABASE_URL: url,
      SMTP_URL: "smtp://127.0.0.1:1",
      AUTH_SECRET: "a secret of the tests, long enough",
      TSX_TSCONFIG_PATH: path.join(projectFolder, "db/commands/tsconfig.json"),
    },
  });
  return { code, lines: output.trim().split("\n") };
}
const person = (...args: string[]) => run("db/commands/person.ts", ...args);
const key = (...args: string[]) => run("db/commands/key.ts", ...args);

test("people and keys are set up without a browser, and the trail names the command line", async () => {
  const added = await person(
    "add",
    "Rita@Cupel.test",
    "--name",
    "Rita Shift",
    "--roles",
    "reviewer, supervisor",
  );
  expect(added.code).toBe(0);
  expect(added.lines[0]).toBe("Added rita@cupel.test (reviewer, supervisor).");
  expect(added.lines[1]).toMatch(/^One-time password: [a-z2-9-]{23}$/);

  const made = await key(
    "add",
    "Night shift",
    "--scopes",
    "cases:decide,cases:read",
    "--as",
    "rita@cupel.test",
  );
  expect(made.code).toBe(0);
  const secret = made.lines[1]?.replace("Key: ", "") ?? "";
  const [row] = await db.select().from(apiKeys);
  const [rita] = await db.select().from(people).where(eq(people.email, "rita@cupel.test"));
  expect(row).toMatchObject({ source: "night-shift", actsForPersonId: rita?.id, hash: hashOfKey(secret) });

  expect((await person("roles", "rita@cupel.test", "--roles", "reviewer")).lines).toEqual([
    "rita@cupel.test is now reviewer.",
  ]);
  expect((await person("deactivate", "rita@cupel.test")).lines).toEqual(["rita@cupel.test is deactivated."]);
  expect((await key("revoke", "Night shift")).lines).toEqual(["The key Night shift is revoked."]);
  const entries = await db.select().from(trail);
  expect(entries.map(({ act, actorKind, actorId }) => [act, actorKind, actorId])).toEqual(
    ["person.added", "key.added", "person.roles_changed", "person.deactivated", "key.revoked"].map((act) => [
      act,
      "system",
      "command line",
    ]),
  );
});

test.each([
  [["add", "no address", "--roles", "reviewer"], /email: .*\n\s+name: /],
  [["add", "x@cupel.test", "--name", "X", "--roles", "reviewer,boss"], /roles\.1: /],
  [["add", "x@cupel.test", "--role", "reviewer"], /Unknown option '--role'/],
  [["reset", "nobody@cupel.test"], /nobody@cupel\.test was not found/],
  [[], /usage: npm run person/],
])("person %j is refused with a line that says what is wrong", async (args, message) => {
  const { code, lines } = await person(...args);
  expect(code).toBe(1);
  expect(lines.join("\n")).toMatch(message);
  expect(lines.join("\n")).not.toMatch(/^\s+at /m);
});
