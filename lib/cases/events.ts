import "server-only";
import { asc, desc, gte, lte } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { labelLog } from "@/db/schema/scorers";
import { demand, mayDo } from "../auth/demand";
import { identify } from "../auth/identify";
import type { Context } from "../context";
import { log } from "../log";
import { EVENT_STREAM_HEADERS, type EventSender, eventStream } from "./event-stream";
import type { RankingEvent, RankingModel } from "./ranking/model";
import { rankingOf } from "./ranking/ranking";
import { maySee, type Reader, readerOf } from "./visibility";

/** Many labels in a row make one `queue` event. */
const GATHER_MS = 100;
/** When so many cases change at once, naming them would say less than `queue` does. */
const MOST_NAMED = 200;

/** Tells live what changes: `queue` for the list as a whole, `case` for each case this person may see. */
export async function streamQueueEvents(ctx: Context, _input: object, request: Request): Promise<Response> {
  demand(ctx, "cases.read");
  const model = rankingOf(ctx.db);
  const feed = { reader: readerOf(ctx.actor), model, ctx };
  const missed = await readMissed(ctx.db, feed.reader, lastSeen(request.headers));
  return eventStream(
    request.signal,
    (sender) => follow(feed, sender, missed),
    async () => {
      // Roles and sessions may end while a stream is open.
      const actor = await identify(request.url, request.headers, ctx.db, ctx.now());
      feed.reader = readerOf(actor);
      return mayDo(actor, "cases.read");
    },
  );
}

/** HEAD answers without a stream: nobody would close it. */
export async function describeQueueEvents(ctx: Context): Promise<Response> {
  demand(ctx, "cases.read");
  return new Response(null, { headers: EVENT_STREAM_HEADERS });
}

type Feed = { reader: Reader; model: RankingModel; ctx: Context };
type CaseNews = { caseId: string; state: string };

function follow(feed: Feed, sender: EventSender, missed: readonly CaseNews[]): () => void {
  const { model } = feed;
  let timer: NodeJS.Timeout | undefined;
  const sendQueue = async () => {
    timer = undefined;
    const news = await model.read(feed.ctx.now(), (view) => ({
      logSeq: view.logSeq,
      version: view.version,
      total: view.countSeenBy(feed.reader, null),
    }));
    sender.send("queue", news.logSeq, { version: news.version, total: news.total });
  };
  const queueSoon = () => {
    timer ??= setTimeout(() => {
      sendQueue().catch((error) => {
        log.error({ requestId: feed.ctx.requestId, err: error }, "The queue could not be told about");
        sender.close();
      });
    }, GATHER_MS);
  };
  const unsubscribe = model.subscribe((event) => {
    for (const news of newsFor(event, feed.reader)) sender.send("case", event.logSeq, news);
    queueSoon();
  });
  for (const news of missed) sender.send("case", model.logSeq, news);
  queueSoon();
  return () => {
    clearTimeout(timer);
    unsubscribe();
  };
}

/** A case that leaves somebody's sight is news to them once more. */
function newsFor({ changes }: RankingEvent, reader: Reader): CaseNews[] {
  const visible = changes.filter(
    ({ before, after }) => (before && maySee(before, reader)) || (after && maySee(after.facts, reader)),
  );
  if (visible.length > MOST_NAMED) return [];
  return visible.map(({ caseId, state }) => ({ caseId, state }));
}

function lastSeen(headers: Headers): number | null {
  const id = headers.get("Last-Event-ID");
  return id !== null && /^\d{1,15}$/.test(id) ? Number(id) : null;
}

/** Cases changed since the label that a returning reader saw last. */
async function readMissed(db: Executor, reader: Reader, seq: number | null): Promise<CaseNews[]> {
  if (seq === null) return [];
  const [label] = await db
    .select({ at: labelLog.at })
    .from(labelLog)
    .where(lte(labelLog.seq, seq))
    .orderBy(desc(labelLog.seq))
    .limit(1);
  if (!label) return [];
  const rows = await db
    .select({
      caseId: cases.id,
      state: cases.state,
      assignedTo: cases.assignedTo,
      claimedBy: cases.claimedBy,
      escalatedAt: cases.escalatedAt,
    })
    .from(cases)
    .where(gte(cases.changedAt, label.at))
    .orderBy(asc(cases.changedAt))
    .limit(MOST_NAMED + 1);
  if (rows.length > MOST_NAMED) return [];
  return rows.filter((row) => maySee(row, reader)).map(({ caseId, state }) => ({ caseId, state }));
}
