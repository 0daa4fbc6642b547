import { and, eq } from "drizzle-orm";
import { beforeAll, describe, expect, inject, test } from "vitest";
import { GET, POST } from "@/app/api/unsubscribe/[token]/route";
import { outbox, summaryRecipients } from "@/db/schema/mail";
import { trail } from "@/db/schema/trail";
import type { PersonActor } from "@/lib/context";
import { sendDueSummaries } from "@/lib/losses/send-summary";
import { setRecipient } from "@/lib/losses/set-recipient";
import { testWorld, type World } from "../support/world";

// RFC 8058: the request is a POST with the body List-Unsubscribe=One-Click, carries no cookies, authorization or other
// context, and is not answered by a redirect; a GET must not unsubscribe.

const APP_URL = "https://cupel.example.test";
const MONDAY_8 = new Date("2026-03-16T08:00:00Z");

let world: World;
let manager: PersonActor;

beforeAll(async () => {
  world = await testWorld();
  manager = await world.person("risk_manager");
  Object.assign(process.env, {
    DATABASE_URL: world.url,
    SMTP_URL: inject("smtpUrl"),
    APP_URL,
    AUTH_SECRET: "a secret of the tests, 32 letters or more",
    LOG_LEVEL: "silent",
  });
});

async function subscriber() {
  const person = await world.person("supervisor");
  const before = new Date("2026-03-14T00:00:00Z");
  await setRecipient(world.ctx(manager, before), { personId: person.personId, weekday: 1, hour: 8 });
  const ctx = world.ctx({ kind: "system", job: "weekly-summaries" }, MONDAY_8);
  await sendDueSummaries(ctx, { appUrl: APP_URL });
  const [mail] = await world.db.select().from(outbox).where(eq(outbox.personId, person.personId));
  const url = /<(.*)>/.exec(mail?.headers["List-Unsubscribe"] ?? "")?.[1] ?? "";
  return { ...person, url, token: url.split("/").at(-1) as string };
}

async function isSubscribed(personId: string) {
  const [row] = await world.db
    .select()
    .from(summaryRecipients)
    .where(eq(summaryRecipients.personId, personId));
  return row?.subscribed === 1;
}

const actsOn = (personId: string) =>
  world.db
    .select()
    .from(trail)
    .where(and(eq(trail.subjectId, personId), eq(trail.act, "recipient.unsubscribed")));

const context = (token: string) => ({ params: Promise.resolve({ token }) });

const oneClick = (token: string, body: BodyInit = new URLSearchParams({ "List-Unsubscribe": "One-Click" })) =>
  POST(new Request(`${APP_URL}/api/unsubscribe/${token}`, { method: "POST", body }), context(token));

describe("one-click unsubscription", () => {
  test("needs nothing but the secret, and ends the summaries", async () => {
    const { personId, token } = await subscriber();
    const answer = await oneClick(token);
    expect(answer.status).toBe(204);
    expect(await isSubscribed(personId)).toBe(false);
    const [entry] = await actsOn(personId);
    expect(entry).toMatchObject({ actorKind: "anonymous", actorId: "anonymous" });
    const next = world.ctx({ kind: "system", job: "weekly-summaries" }, new Date("2026-03-23T08:00:00Z"));
    await sendDueSummaries(next, { appUrl: APP_URL });
    const mails = await world.db.select().from(outbox).where(eq(outbox.personId, personId));
    expect(mails).toHaveLength(1);
  });

  test("takes the body as a form of either kind", async () => {
    const form = new FormData();
    form.set("List-Unsubscribe", "One-Click");
    const { personId, token } = await subscriber();
    expect((await oneClick(token, form)).status).toBe(204);
    expect(await isSubscribed(personId)).toBe(false);
  });

  test("answers a second time as it did the first, and changes nothing more", async () => {
    const { personId, token } = await subscriber();
    const answers = [await oneClick(token), await oneClick(token)];
    expect(answers.map((answer) => answer.status)).toEqual([204, 204]);
    expect(await actsOn(personId)).toHaveLength(1);
    await setRecipient(world.ctx(manager), { personId, weekday: 1, hour: 8 });
    expect(await isSubscribed(personId)).toBe(true);
  });

  test("answers a forged secret alike and changes nothing", async () => {
    const { personId, token } = await subscriber();
    const forged = [
      `${token.slice(0, -1)}${token.endsWith("A") ? "B" : "A"}`,
      "x",
      token.toUpperCase(),
      personId,
    ];
    for (const guess of forged) {
      const answer = await oneClick(guess);
      expect(answer.status).toBe(204);
      expect(answer.headers.get("Location")).toBeNull();
      expect(await answer.text()).toBe("");
    }
    expect(await isSubscribed(personId)).toBe(true);
    expect(await actsOn(personId)).toEqual([]);
  });

  test("does not happen by opening the address, which leads to a page with a button", async () => {
    const { personId, token, url } = await subscriber();
    const answer = await GET(new Request(url), context(token));
    expect(answer.status).toBe(303);
    expect(answer.headers.get("Location")).toBe(`/unsubscribe/${token}`);
    expect(await isSubscribed(personId)).toBe(true);
  });
});
