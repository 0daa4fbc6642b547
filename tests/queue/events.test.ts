import { beforeAll, describe, expect, test } from "vitest";
import { assignCase } from "@/lib/cases/assign";
import { claimCase } from "@/lib/cases/claim";
import { describeQueueEvents, streamQueueEvents } from "@/lib/cases/events";
import { casesChanged } from "@/lib/cases/notify";
import { listQueue } from "@/lib/cases/queue";
import { rankingOf, stopRanking } from "@/lib/cases/ranking/ranking";
import { QueueInput } from "@/lib/cases/schema";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { testWorld, type WaitingCase, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let tove: PersonActor;
let supervisor: PersonActor;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  [mira, tove, supervisor] = [
    await world.person("reviewer"),
    await world.person("reviewer"),
    await world.person("supervisor"),
  ];
  return () => stopRanking(world.db);
});

const ctx = (person: PersonActor) => world.ctx(person, new Date());

async function oneCase(): Promise<string> {
  const [one] = (await world.waitingCases(1, { seed: seed++, openedAt: new Date() })) as [WaitingCase];
  casesChanged([one.caseId]);
  await rankingOf(world.db).read(new Date(), () => undefined);
  return one.caseId;
}

/** How many cases wait that this person may see. */
const seenBy = async (person: PersonActor) =>
  (await listQueue(ctx(person), QueueInput.parse({ limit: 1 }))).total;

const decide = (person: PersonActor, id: string, seenVersion = 1) =>
  decideCase(ctx(person), {
    id,
    verdict: "legitimate",
    typology: null,
    confidence: "sure",
    seenVersion,
    scoreWasHidden: false,
    together: [],
  });

type Event = { id: number; event: string; data: Record<string, unknown> };

/** Reads the stream as a browser's EventSource does. */
class Listener {
  readonly events: Event[] = [];
  ended = false;
  private readonly abort = new AbortController();

  static async open(person: PersonActor, lastEventId?: number): Promise<Listener> {
    const listener = new Listener();
    const request = new Request("http://localhost/api/queue/events", {
      signal: listener.abort.signal,
      headers: lastEventId === undefined ? {} : { "Last-Event-ID": String(lastEventId) },
    });
    const response = await streamQueueEvents(ctx(person), {}, request);
    expect(response.headers.get("Content-Type")).toContain("text/event-stream");
    void listener.read(response.body as ReadableStream<Uint8Array>);
    return listener;
  }

  private async read(body: ReadableStream<Uint8Array>): Promise<void> {
    const decoder = new TextDecoder();
    let text = "";
    for await (const chunk of body) {
      text += decoder.decode(chunk, { stream: true });
      const blocks = text.split("\n\n");
      text = blocks.pop() ?? "";
      for (const block of blocks) this.take(block);
    }
    this.ended = true;
  }

  private take(block: string): void {
    if (block.startsWith(":")) return;
    const fields = Object.fromEntries(block.split("\n").map((line) => line.split(/: (.*)/s)));
    this.events.push({ id: Number(fields.id), event: fields.event, data: JSON.parse(fields.data) });
  }

  cases(): Record<string, unknown>[] {
    return this.events.filter(({ event }) => event === "case").map(({ data }) => data);
  }

  async until(holds: (listener: Listener) => boolean): Promise<void> {
    const deadline = Date.now() + 60_000;
    while (!holds(this)) {
      if (Date.now() > deadline) throw new Error(`Not among ${JSON.stringify(this.events)}`);
      await new Promise((resolve) => setTimeout(resolve, 10));
    }
  }

  async close(): Promise<void> {
    this.abort.abort();
    await this.until(({ ended }) => ended);
  }
}

const has = (wanted: Record<string, unknown>) => (listener: Listener) =>
  listener.events.some(({ data }) => Object.entries(wanted).every(([key, value]) => data[key] === value));

describe("the live stream", () => {
  test("opens with where the queue stands, and tells of a claim and of a decision with the log's sequence", async () => {
    const id = await oneCase();
    const total = await seenBy(tove);
    const listener = await Listener.open(tove);
    await listener.until(({ events }) => events.length > 0);
    expect(listener.events[0]).toMatchObject({ event: "queue", data: { total } });
    await claimCase(ctx(mira), { id });
    await listener.until(has({ caseId: id, state: "claimed" }));
    const { scorerVersion } = await decide(mira, id, 2);
    await listener.until(has({ caseId: id, state: "decided" }));
    await listener.until(has({ version: scorerVersion, total: total - 1 }));
    const { logSeq } = rankingOf(world.db);
    expect(logSeq).toBeGreaterThan(0);
    expect(listener.events.at(-1)).toMatchObject({ event: "queue", id: logSeq });
    await listener.close();
  });

  test("tells a reviewer once when a case is given to a colleague, and then no more of it", async () => {
    const id = await oneCase();
    const [forMira, forSupervisor] = [await Listener.open(mira), await Listener.open(supervisor)];
    await assignCase(ctx(supervisor), { id, personId: tove.personId });
    await forMira.until(has({ caseId: id, state: "open" }));
    await claimCase(ctx(tove), { id });
    await decide(tove, id, 3);
    await forSupervisor.until(has({ caseId: id, state: "decided" }));
    expect(forSupervisor.cases()).toContainEqual({ caseId: id, state: "claimed" });
    await forMira.until(has({ version: rankingOf(world.db).version }));
    expect(forMira.cases()).toEqual([{ caseId: id, state: "open" }]);
    await forMira.close();
    await forSupervisor.close();
  });

  test("resumes behind the last event that was seen", async () => {
    const [first, second, third] = [await oneCase(), await oneCase(), await oneCase()];
    const listener = await Listener.open(mira);
    await decide(tove, first);
    await listener.until(has({ caseId: first, state: "decided" }));
    await listener.until(({ events }) => events.at(-1)?.event === "queue");
    const lastSeen = listener.events.at(-1)?.id as number;
    await listener.close();
    await new Promise((resolve) => setTimeout(resolve, 5));
    await decide(tove, second);
    await claimCase(ctx(tove), { id: third });
    const again = await Listener.open(mira, lastSeen);
    await again.until(has({ caseId: second, state: "decided" }));
    await again.until(has({ caseId: third, state: "claimed" }));
    await again.until(({ events }) => events.some(({ event }) => event === "queue"));
    await again.close();
  });

  test("ends when the reader goes away, and when the server is told to stop", async () => {
    const [one, two] = [await Listener.open(mira), await Listener.open(supervisor)];
    await one.close();
    expect(two.ended).toBe(false);
    process.emit("SIGTERM");
    await two.until(({ ended }) => ended);
  });

  test("is refused to those who may not see cases, and HEAD answers without a stream", async () => {
    const administrator = await world.person("administrator");
    await expect(Listener.open(administrator)).rejects.toMatchObject({ code: "forbidden" });
    const head = await describeQueueEvents(ctx(mira));
    expect(head.body).toBeNull();
    expect(head.headers.get("Content-Type")).toContain("text/event-stream");
  });
});
