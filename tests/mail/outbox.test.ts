import { eq } from "drizzle-orm";
import { MailDev } from "maildev";
import { afterEach, beforeAll, describe, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { outbox, summaryRecipients } from "@/db/schema/mail";
import { people, personRoles } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import type { Role } from "@/lib/auth/codes";
import type { PersonActor } from "@/lib/context";
import { listSummaries } from "@/lib/losses/summaries";
import { enqueueMail, type Message } from "@/lib/mail/enqueue";
import { markMailAsSent } from "@/lib/mail/mark-as-sent";
import { SENDING_LEASE_MS } from "@/lib/mail/rules";
import { sendMailAgain } from "@/lib/mail/send-again";
import { sendDueMail } from "@/lib/mail/send-due";
import { newId } from "@/lib/new-id";
import { freePort } from "../../db/server/ports.mjs";
import { awaitMail, type CaughtMail, readMail } from "../support/mailbox";
import { testWorld, WORLD_START, type World } from "../support/world";
import { type CrookedSmtp, startCrookedSmtp } from "./crooked-smtp";
import { sourceOf } from "./source";

let world: World;
let manager: PersonActor;
const crooked: CrookedSmtp[] = [];

beforeAll(async () => {
  world = await testWorld();
  manager = await world.person("risk_manager");
});
afterEach(async () => {
  for (const server of crooked.splice(0)) await server.stop();
});

const appUrl = "https://cupel.example.test";
const settings = (smtpUrl = inject("smtpUrl")) => ({ smtpUrl, from: "cupel@example.test", appUrl });
const later = (ms: number) => new Date(WORLD_START.getTime() + ms);
const send = (at: Date, smtpUrl?: string) =>
  sendDueMail(world.ctx({ kind: "system", job: "outbox" }, at), settings(smtpUrl));

/** A message to a person of its own, who is on the list of the weekly summary. */
async function queue(more: Partial<Message> = {}, role: Role = "supervisor") {
  const { personId } = await world.person(role);
  const recipient = `${personId}@example.test`;
  const list = { weekday: 1, hour: 8, subscribedAt: WORLD_START, changedAt: WORLD_START };
  await world.db.insert(summaryRecipients).values({ personId, ...list });
  const message: Message = {
    dedupeKey: newId(),
    kind: "weekly_summary",
    personId,
    recipient,
    subject: "Losses in week 2026-W09",
    html: "<p>Größe</p>",
    text: "Größe",
    ...more,
  };
  const queued = await world.db.transaction((tx) => enqueueMail(tx, message, { appUrl, now: WORLD_START }));
  const [row] = await world.db.select().from(outbox).where(eq(outbox.dedupeKey, message.dedupeKey));
  return { queued, personId, recipient, id: row?.id as string, messageId: row?.messageId as string };
}

async function rowOf(id: string) {
  const [row] = await world.db.select().from(outbox).where(eq(outbox.id, id));
  return row as NonNullable<typeof row>;
}

async function misbehave(ways: Parameters<typeof startCrookedSmtp>[0]) {
  const server = await startCrookedSmtp(ways);
  crooked.push(server);
  return server;
}

test("a queued message reaches the mail server once, whole, under the Message-ID it was given", async () => {
  const { id, recipient, messageId } = await queue({ headers: { "List-Id": "summary.cupel" } });
  await send(WORLD_START);
  await send(WORLD_START);
  const [mail, ...more] = await awaitMail(inject("mailUrl"), recipient);
  expect(more).toEqual([]);
  expect(mail).toMatchObject({
    subject: "Losses in week 2026-W09",
    from: [{ address: "cupel@example.test", name: "Cupel" }],
    html: "<p>Größe</p>",
  });
  expect(mail?.text.trim()).toBe("Größe");
  expect(mail?.headers["message-id"]).toBe(messageId);
  expect(await sourceOf(inject("mailUrl"), mail as CaughtMail)).toMatch(/^List-Id: summary\.cupel\r$/im);
  expect(messageId).toBe(`<${id}@cupel.example.test>`);
  expect(await rowOf(id)).toMatchObject({ state: "sent", sentAt: WORLD_START, problem: null, attempts: 1 });
});

test("the same message cannot be queued twice, nor one rolled back be sent", async () => {
  const first = await queue({ dedupeKey: "weekly:2026-W09:someone" });
  const second = await queue({ dedupeKey: "weekly:2026-W09:someone" });
  expect([first.queued, second.queued]).toEqual([true, false]);
  const recipient = `${newId()}@example.test`;
  await expect(
    world.db.transaction(async (tx) => {
      const message = { dedupeKey: newId(), kind: "weekly_summary" as const, personId: manager.personId };
      await enqueueMail(
        tx,
        { ...message, recipient, subject: "S", html: "", text: "" },
        { appUrl, now: WORLD_START },
      );
      throw new Error("the work failed");
    }),
  ).rejects.toThrow("the work failed");
  await send(WORLD_START);
  expect(await readMail(inject("mailUrl"), recipient)).toEqual([]);
});

test.each(["Card 4111 1111 1111 1111 seen", "Two\nlines", "About jo@example.test"])(
  "a subject is refused that shows what it must not: %j",
  async (subject) => {
    await expect(queue({ subject })).rejects.toThrow(/^A subject/);
  },
);

test("while the mail server is down a message waits longer after each attempt, and goes out when it is up", async () => {
  const port = await freePort();
  const url = `smtp://127.0.0.1:${port}`;
  const { id, recipient } = await queue();
  await send(WORLD_START, url);
  expect(await rowOf(id)).toMatchObject({ state: "queued", attempts: 1, nextAttemptAt: later(15_000) });
  expect((await rowOf(id)).problem).toMatch(/ECONNREFUSED/);
  await send(later(14_000), url);
  expect((await rowOf(id)).attempts).toBe(1);
  await send(later(15_000), url);
  expect(await rowOf(id)).toMatchObject({ state: "queued", attempts: 2, nextAttemptAt: later(45_000) });

  const web = await freePort();
  const catcher = new MailDev({ smtp: port, ip: "127.0.0.1", web, webIp: "127.0.0.1", silent: true });
  await catcher.start();
  try {
    await send(later(60_000), url);
    expect(await readMail(`http://127.0.0.1:${web}`, recipient)).toHaveLength(1);
    expect(await rowOf(id)).toMatchObject({ state: "sent", attempts: 3, problem: null });
  } finally {
    await catcher.stop();
  }
});

describe("a send whose answer was lost", () => {
  test("is uncertain, and is not repeated by itself", async () => {
    const lossy = await misbehave({ end: null });
    const { id, messageId } = await queue();
    await send(WORLD_START, lossy.url);
    expect(await rowOf(id)).toMatchObject({ state: "uncertain", sentAt: null, attempts: 1 });
    expect((await rowOf(id)).problem).toBeTruthy();
    await send(later(7 * 86_400_000), lossy.url);
    expect(lossy.taken.filter((message) => message.includes(messageId))).toHaveLength(1);
  });

  test("is sent again when a person says so, under the same Message-ID", async () => {
    const lossy = await misbehave({ end: null });
    const { id, recipient, messageId } = await queue();
    await send(WORLD_START, lossy.url);
    await sendMailAgain(world.ctx(manager, later(1_000)), { id });
    await send(later(2_000));
    const [mail] = await awaitMail(inject("mailUrl"), recipient);
    expect(mail?.headers["message-id"]).toBe(messageId);
    expect(await actsOn(id)).toEqual(["mail.sent_again"]);
  });

  test("is settled when a person says that it arrived", async () => {
    const lossy = await misbehave({ end: null });
    const { id, recipient } = await queue();
    await send(WORLD_START, lossy.url);
    await markMailAsSent(world.ctx(manager, later(1_000)), { id });
    await send(later(2_000));
    expect(await readMail(inject("mailUrl"), recipient)).toEqual([]);
    expect(await rowOf(id)).toMatchObject({ state: "sent", sentAt: later(1_000) });
    expect(await actsOn(id)).toEqual(["mail.marked_sent"]);
    await expect(sendMailAgain(world.ctx(manager), { id })).rejects.toThrow("does not wait");
  });

  test("by a server that died is uncertain once its lease is over, and not before", async () => {
    const { id, recipient } = await queue();
    const lease = { state: "sending" as const, leaseOwner: newId(), nextAttemptAt: later(SENDING_LEASE_MS) };
    await world.db.update(outbox).set(lease).where(eq(outbox.id, id));
    await send(later(SENDING_LEASE_MS));
    expect((await rowOf(id)).state).toBe("sending");
    await send(later(SENDING_LEASE_MS + 1));
    expect(await rowOf(id)).toMatchObject({ state: "uncertain" });
    expect(await readMail(inject("mailUrl"), recipient)).toEqual([]);
  });

  test("is nobody's to settle but the risk manager's", async () => {
    const { id } = await queue();
    for (const role of ["reviewer", "supervisor", "auditor", "administrator"] as const) {
      const person = await world.person(role);
      await expect(sendMailAgain(world.ctx(person), { id })).rejects.toThrow("role");
      await expect(markMailAsSent(world.ctx(person), { id })).rejects.toThrow("role");
    }
  });
});

describe("a message the server refuses", () => {
  test("for good is not tried again, and shows why without the address", async () => {
    const server = await misbehave({ recipient: "550 no such user somebody@example.test" });
    const { id } = await queue();
    await send(WORLD_START, server.url);
    const row = await rowOf(id);
    expect(row).toMatchObject({ state: "failed", attempts: 1 });
    expect(row.problem).toContain("550");
    expect(row.problem).not.toContain("@");
  });

  test("for now is tried again, since the server said that it had not taken it", async () => {
    const server = await misbehave({ end: "451 try later" });
    const { id } = await queue();
    await send(WORLD_START, server.url);
    expect(await rowOf(id)).toMatchObject({ state: "queued", nextAttemptAt: later(15_000) });
  });
});

describe("a message whose recipient may no longer read it when the mail server is back", () => {
  const deactivate = (id: string) =>
    world.db.update(people).set({ state: "deactivated" }).where(eq(people.id, id));
  const rename = (id: string) =>
    world.db
      .update(people)
      .set({ email: `new-${id}@example.test` })
      .where(eq(people.id, id));
  const become = (role: Role) => (id: string) =>
    world.db.update(personRoles).set({ role }).where(eq(personRoles.personId, id));
  const unsubscribe = (id: string) =>
    world.db.update(summaryRecipients).set({ subscribed: 0 }).where(eq(summaryRecipients.personId, id));
  const leaveTheList = (id: string) =>
    world.db.delete(summaryRecipients).where(eq(summaryRecipients.personId, id));

  test.each([
    ["a summary to somebody who was deactivated", "weekly_summary", deactivate],
    ["a summary to an address that is no longer theirs", "weekly_summary", rename],
    ["a summary to somebody who may no longer read losses", "weekly_summary", become("reviewer")],
    ["a summary to somebody who ended it", "weekly_summary", unsubscribe],
    ["a summary to somebody who was taken off the list", "weekly_summary", leaveTheList],
    ["a question to somebody who may no longer approve policies", "approval_wanted", become("reviewer")],
    ["a question to somebody who was deactivated", "approval_wanted", deactivate],
    ["word of a case to somebody who no longer works cases", "case_assigned", become("auditor")],
    ["word of deadlines to somebody who no longer works cases", "deadline_digest", become("administrator")],
  ] as const)("is never sent: %s", async (_, kind, change) => {
    const down = `smtp://127.0.0.1:${await freePort()}`;
    const { id, personId, recipient } = await queue({ kind });
    await send(WORLD_START, down);
    expect(await rowOf(id)).toMatchObject({ state: "queued", attempts: 1 });
    await change(personId);
    await send(later(86_400_000));
    const problem = "The recipient may no longer read this";
    expect(await rowOf(id)).toMatchObject({ state: "failed", problem, sentAt: null, leaseOwner: null });
    await sendMailAgain(world.ctx(manager, later(86_400_000)), { id });
    await send(later(86_400_000));
    expect(await rowOf(id)).toMatchObject({ state: "failed", problem });
    expect(await readMail(inject("mailUrl"), recipient)).toEqual([]);
    const { items } = await listSummaries(world.ctx(manager), { limit: 100 });
    expect(items.find((item) => item.id === id)).toMatchObject({ state: "failed", problem });
  });

  test.each([
    ["weekly_summary", "auditor"],
    ["approval_wanted", "risk_manager"],
    ["case_assigned", "reviewer"],
    ["deadline_digest", "supervisor"],
  ] as const)("does not stop %s to a person with the role of %s", async (kind, role) => {
    const { id, recipient } = await queue({ kind }, role);
    await send(WORLD_START);
    expect(await rowOf(id)).toMatchObject({ state: "sent", problem: null });
    expect(await awaitMail(inject("mailUrl"), recipient)).toHaveLength(1);
  });

  test("does not stop other mail to a person who is not on the list of the summary", async () => {
    const { id, personId } = await queue({ kind: "approval_wanted" });
    await leaveTheList(personId);
    await send(WORLD_START);
    expect((await rowOf(id)).state).toBe("sent");
  });
});

test("many senders at once send each message once", async () => {
  const queued = await Promise.all(Array.from({ length: 30 }, () => queue()));
  const servers = [createDatabase(world.url, 4), createDatabase(world.url, 4), createDatabase(world.url, 4)];
  try {
    const at = { ...world.ctx({ kind: "system", job: "outbox" }) };
    await Promise.all(servers.map(({ db }) => sendDueMail({ ...at, db }, settings())));
  } finally {
    await Promise.all(servers.map((server) => server.close()));
  }
  for (const { recipient, id } of queued) {
    expect(await awaitMail(inject("mailUrl"), recipient)).toHaveLength(1);
    expect(await rowOf(id)).toMatchObject({ state: "sent", attempts: 1 });
  }
});

async function actsOn(id: string): Promise<string[]> {
  const rows = await world.db.select().from(trail).where(eq(trail.subjectId, id));
  return rows.map((row) => row.act);
}
