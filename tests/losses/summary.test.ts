import { and, eq } from "drizzle-orm";
import { beforeAll, describe, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { outbox, summaryRecipients } from "@/db/schema/mail";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import type { PersonActor } from "@/lib/context";
import { removeRecipient } from "@/lib/losses/remove-recipient";
import { sendDueSummaries } from "@/lib/losses/send-summary";
import { sendSummaryNow } from "@/lib/losses/send-summary-now";
import { setRecipient } from "@/lib/losses/set-recipient";
import { listSummaries, readRecipients, readSummary } from "@/lib/losses/summaries";
import { sendDueMail } from "@/lib/mail/send-due";
import { sourceOf } from "../mail/source";
import { awaitMail, type CaughtMail } from "../support/mailbox";
import { testWorld, WORLD_START, type World } from "../support/world";
import { decidedPayment } from "./decided-payments";

const APP_URL = "https://cupel.example.test";
const BEFORE = new Date("2026-03-14T00:00:00Z");
const LAST_WEEK = new Date("2026-03-12T10:00:00Z");
const MONDAY_8 = new Date("2026-03-16T08:00:00Z");
const system = { kind: "system" as const, job: "weekly-summaries" };

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
  });
  await decidedPayment(
    world,
    { amountMinor: 1_234_567, occurredAt: LAST_WEEK, action: "pass" },
    { verdict: "fraudulent", typology: "payer_manipulated", decidedAt: LAST_WEEK },
  );
});

async function recipient(at = BEFORE) {
  const person = await world.person("supervisor");
  await setRecipient(world.ctx(manager, at), { personId: person.personId, weekday: 1, hour: 8 });
  const [row] = await world.db.select().from(people).where(eq(people.id, person.personId));
  return { person, address: row?.email as string };
}

const queueDue = (at: Date) => sendDueSummaries(world.ctx(system, at), { appUrl: APP_URL });
const deliver = (at: Date) =>
  sendDueMail(world.ctx(system, at), {
    smtpUrl: inject("smtpUrl"),
    from: "cupel@example.test",
    appUrl: APP_URL,
  });

async function mailOf(person: PersonActor) {
  return world.db.select().from(outbox).where(eq(outbox.personId, person.personId));
}

test("on the chosen morning each recipient gets last week's figures, in HTML and in plain text", async () => {
  const { person, address } = await recipient();
  await queueDue(new Date(MONDAY_8.getTime() - 1));
  expect(await mailOf(person)).toEqual([]);
  await queueDue(MONDAY_8);
  await deliver(MONDAY_8);
  const [mail, ...more] = await awaitMail(inject("mailUrl"), address);
  expect(more).toEqual([]);
  expect(mail?.subject).toBe("Losses in week 11 of 2026");
  const asRead = (body = "") => body.replaceAll("<!-- -->", "").replaceAll("&amp;", "&").replace(/\s/g, " ");
  for (const body of [asRead(mail?.text), asRead(mail?.html)]) {
    expect(body).toContain("12 345.67 EUR");
    expect(body).toContain("Payer manipulated");
    expect(body).toContain("Monday 9 March 2026 to Sunday 15 March 2026");
    expect(body).toContain("Provisional");
    expect(body).toContain(`${APP_URL}/losses?week=2026-W11`);
    expect(body).toContain(`${APP_URL}/unsubscribe/`);
    expect(body).toContain("Value detection: 0.0 %");
  }
  expect(mail?.html).not.toMatch(/<img|url\(/);
  const [queued] = await world.db
    .select()
    .from(trail)
    .where(and(eq(trail.act, "summary.queued"), eq(trail.subjectId, "2026-W11")));
  expect(JSON.parse(queued?.facts ?? "")).toMatchObject({ week: "2026-W11" });
});

test("two servers racing at the same moment, and again later, send one summary to each", async () => {
  const recipients = await Promise.all(Array.from({ length: 6 }, () => recipient()));
  const servers = [createDatabase(world.url, 6), createDatabase(world.url, 6)];
  try {
    const at = new Date(MONDAY_8.getTime() + 60_000);
    const race = servers.flatMap(({ db }) => {
      const ctx = { ...world.ctx(system, at), db };
      const mail = { smtpUrl: inject("smtpUrl"), from: "cupel@example.test", appUrl: APP_URL };
      return [1, 2].map(async () => {
        const queued = await sendDueSummaries(ctx, { appUrl: APP_URL });
        await sendDueMail(ctx, mail);
        return queued;
      });
    });
    const queued = await Promise.all(race);
    expect(queued.reduce((sum, count) => sum + count, 0)).toBe(recipients.length);
    await queueDue(new Date("2026-03-19T00:00:00Z"));
    await deliver(new Date("2026-03-19T00:00:00Z"));
  } finally {
    await Promise.all(servers.map((server) => server.close()));
  }
  for (const { person, address } of recipients) {
    expect(await awaitMail(inject("mailUrl"), address)).toHaveLength(1);
    expect(await mailOf(person)).toMatchObject([{ state: "sent", period: "2026-W11" }]);
  }
});

test("the next week brings the next summary, and an empty week says so in words", async () => {
  const { person, address } = await recipient(new Date("2026-03-16T09:00:00Z"));
  await queueDue(new Date("2026-03-17T09:00:00Z"));
  expect(await mailOf(person)).toEqual([]);
  await queueDue(new Date("2026-03-23T08:00:00Z"));
  await deliver(new Date("2026-03-23T08:00:00Z"));
  const [mail] = await awaitMail(inject("mailUrl"), address);
  expect(mail?.text).toContain("No payment of this week has been found fraudulent.");
  expect(mail?.text).toContain("Value detection: not defined");
  expect(mail?.text).toContain("Fraud rate: not defined");
});

describe("the headers of RFC 8058", () => {
  test("name one HTTPS address with a secret of its own, and the one-click body", async () => {
    const first = await recipient();
    const second = await recipient();
    await queueDue(MONDAY_8);
    await deliver(MONDAY_8);
    const tokens = [];
    for (const { address } of [first, second]) {
      const [mail] = await awaitMail(inject("mailUrl"), address);
      const source = (await sourceOf(inject("mailUrl"), mail as CaughtMail)).replace(/\r\n[ \t]+/g, " ");
      expect(source).toMatch(/^List-Unsubscribe-Post: List-Unsubscribe=One-Click\r$/im);
      const header = /^List-Unsubscribe: (.*)\r$/im.exec(source)?.[1] ?? "";
      const [, token] =
        /^<https:\/\/cupel\.example\.test\/api\/unsubscribe\/([\w-]{43})>$/.exec(header) ?? [];
      expect(token).toBeDefined();
      tokens.push(token);
    }
    expect(tokens[0]).not.toBe(tokens[1]);
  });
});

describe("the list of recipients", () => {
  test("is kept by the risk manager, and each change is in the trail", async () => {
    const { person } = await recipient();
    await setRecipient(world.ctx(manager), { personId: person.personId, weekday: 2, hour: 7 });
    const { items, others } = await readRecipients(world.ctx(manager));
    expect(items.find((one) => one.personId === person.personId)).toEqual({
      personId: person.personId,
      name: person.name,
      timeZone: "UTC",
      weekday: 2,
      hour: 7,
      subscribed: true,
    });
    expect(others.some((one) => one.personId === person.personId)).toBe(false);
    await removeRecipient(world.ctx(manager), { personId: person.personId });
    await expect(removeRecipient(world.ctx(manager), { personId: person.personId })).rejects.toThrow(
      "not found",
    );
    const acts = await world.db
      .select({ act: trail.act })
      .from(trail)
      .where(eq(trail.subjectId, person.personId));
    expect(acts.map(({ act }) => act)).toEqual(["recipient.added", "recipient.changed", "recipient.removed"]);
    for (const role of ["reviewer", "supervisor", "auditor", "administrator"] as const) {
      const other = await world.person(role);
      const input = { personId: person.personId, weekday: 1, hour: 1 };
      await expect(setRecipient(world.ctx(other), input)).rejects.toThrow("role");
    }
  });

  test("takes nobody who may not read losses, and sends nothing to who no longer may", async () => {
    const reviewer = await world.person("reviewer");
    const input = { personId: reviewer.personId, weekday: 1, hour: 8 };
    await expect(setRecipient(world.ctx(manager), input)).rejects.toMatchObject({
      errors: [{ path: "personId" }],
    });
    const { person } = await recipient();
    await world.db.update(people).set({ state: "deactivated" }).where(eq(people.id, person.personId));
    await queueDue(MONDAY_8);
    expect(await mailOf(person)).toEqual([]);
  });

  test("a change of hour on the morning itself neither loses nor doubles the summary", async () => {
    const { person } = await recipient();
    const early = new Date("2026-03-16T07:30:00Z");
    await setRecipient(world.ctx(manager, early), { personId: person.personId, weekday: 1, hour: 7 });
    await queueDue(early);
    await setRecipient(world.ctx(manager, early), { personId: person.personId, weekday: 1, hour: 9 });
    await queueDue(new Date("2026-03-16T09:30:00Z"));
    expect(await mailOf(person)).toHaveLength(1);
  });
});

test("sending now does not wait for the morning, and leaves alone who has the week already", async () => {
  await recipient(WORLD_START);
  const { personId } = (await recipient(WORLD_START)).person;
  const at = new Date("2026-03-14T00:00:00Z");
  const first = await sendSummaryNow(world.ctx(manager, at), { week: "2026-W10" });
  expect(first.queued).toBeGreaterThanOrEqual(2);
  expect(await sendSummaryNow(world.ctx(manager, at), { week: "2026-W10" })).toEqual({
    week: "2026-W10",
    queued: 0,
    alreadyQueued: first.queued,
  });
  await world.db.delete(summaryRecipients).where(eq(summaryRecipients.personId, personId));
});

test("past summaries are listed with their state, page by page, and shown without anybody's secret", async () => {
  const auditor = await world.person("auditor");
  const first = await listSummaries(world.ctx(auditor), { limit: 2 });
  expect(first.items).toHaveLength(2);
  expect(first.next).toBe(first.items[1]?.id);
  const second = await listSummaries(world.ctx(auditor), { limit: 2, cursor: first.next as string });
  expect(second.items.map((item) => item.id)).not.toContain(first.items[1]?.id);
  const content = await readSummary(world.ctx(auditor), { id: first.items[0]?.id as string });
  expect(content.html).toContain("/unsubscribe/hidden");
  expect(content.text + content.html).not.toMatch(/unsubscribe\/[\w-]{43}/);
});
