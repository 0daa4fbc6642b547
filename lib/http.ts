import "server-only";
import type { z } from "zod";
import { sharedDatabase } from "@/db/client";
import { demand } from "./auth/demand";
import { identify } from "./auth/identify";
import { isForbidden, recordRefusedAccess } from "./auth/refused-access";
import type { Actor, Context } from "./context";
import { type Endpoint, pathParameters } from "./endpoint";
import { ENDPOINTS, type EndpointKey } from "./endpoints";
import { environment } from "./env";
import { invalid } from "./errors";
import { fieldErrors } from "./field-errors";
import { orGoneAway } from "./gone-away";
import { idempotencyOf, keyOf } from "./idempotency-key";
import { refuseUntilInstalled } from "./installed";
import { log } from "./log";
import { observeCall } from "./metrics";
import { newId } from "./new-id";
import { refuseForeignOrigin } from "./origin";
import { problemResponse } from "./problem";
import { spendFromBudget } from "./rate-limit";
import { readJsonBody } from "./request-body";
import { ReplayedAnswer } from "./write-once";

type InputOf<K extends EndpointKey> = z.output<(typeof ENDPOINTS)[K]["input"]>;
type OutputOf<K extends EndpointKey> = (typeof ENDPOINTS)[K]["output"] extends z.ZodType
  ? z.input<(typeof ENDPOINTS)[K]["output"]>
  : Response;

type RouteArguments = { params: Promise<Record<string, string | string[] | undefined>> };

/** A use case reached by HTTP. `null` answers 204. */
type Handler<K extends EndpointKey> = (
  ctx: Context,
  input: InputOf<K>,
  request: Request,
) => Promise<OutputOf<K> | Response | null>;

/**
 * The only door: finds out who calls, asks the access matrix, checks the input against the endpoint's schema,
 * and turns every error into a problem of RFC 9457.
 */
export function route<K extends EndpointKey>(key: K, handler: Handler<K>) {
  const endpoint: Endpoint = ENDPOINTS[key];
  return async (request: Request, { params }: RouteArguments): Promise<Response> => {
    const requestId = newId();
    const startedMs = performance.now();
    let ctx: Context | null = null;
    let response: Response;
    try {
      ctx = await contextOf(request, endpoint, requestId);
      await admit(ctx, endpoint, request);
      const input = await readInput(key, endpoint, request, await params);
      const sent = endpoint.body === "raw" ? null : keyOf(request);
      const keyed = { ...ctx, idempotency: idempotencyOf(sent, { route: key, input }) };
      response = toResponse(await handler(keyed, input as InputOf<K>, request), endpoint);
    } catch (thrown) {
      const error = orGoneAway(thrown, request.signal);
      if (ctx && isForbidden(error)) await recordRefusedAccess(ctx, { route: key, may: endpoint.may });
      response =
        error instanceof ReplayedAnswer
          ? toResponse(error.answer, endpoint)
          : problemResponse(error, requestId);
    }
    response.headers.set("X-Request-Id", requestId);
    if (!response.headers.has("Cache-Control")) response.headers.set("Cache-Control", "no-store");
    const ms = performance.now() - startedMs;
    observeCall(key, response.status, ms / 1000);
    log.info({
      requestId,
      route: key,
      status: response.status,
      actor: ctx ? actorLabel(ctx.actor) : null,
      ms: Math.round(ms),
    });
    return response;
  };
}

async function contextOf(request: Request, endpoint: Endpoint, requestId: string): Promise<Context> {
  const db = sharedDatabase(environment().DATABASE_URL);
  const base = { db, now: () => new Date(), requestId, idempotency: null };
  if (endpoint.may === "anyone") return { ...base, actor: { kind: "anonymous" } };
  refuseUntilInstalled();
  return { ...base, actor: await identify(request.url, request.headers, db, base.now()) };
}

/** Refuses before the input is read, so that whoever may not learns nothing about it. */
async function admit(ctx: Context, { may }: Endpoint, request: Request): Promise<void> {
  if (may === "anyone") return;
  demand(ctx, may);
  refuseForeignOrigin(request, ctx.actor);
  await spendFromBudget(ctx.actor);
}

async function readInput(
  key: string,
  endpoint: Endpoint,
  request: Request,
  params: Record<string, string | string[] | undefined>,
): Promise<unknown> {
  const names = pathParameters(key);
  const fromPath = Object.fromEntries(names.map((name) => [name, params[name]]));
  const url = new URL(request.url);
  const fromQuery = Object.fromEntries(url.searchParams);
  const isJson = request.method !== "GET" && (endpoint.body ?? "json") === "json";
  const fromBody = isJson ? await readJsonBody(request) : {};
  const sent: Record<string, unknown> = isJson ? fromBody : fromQuery;
  const clash = names.find((name) => name in sent);
  if (clash)
    throw invalid([{ path: clash, message: "belongs in the address, not in the body or the query" }]);
  const parsed = endpoint.input.safeParse({ ...sent, ...fromPath });
  if (!parsed.success) throw invalid(fieldErrors(parsed.error));
  return parsed.data;
}

function toResponse(answer: unknown, endpoint: Endpoint): Response {
  if (answer instanceof Response) return answer;
  if (answer === null || answer === undefined) return new Response(null, { status: 204 });
  return Response.json(answer, { status: endpoint.status ?? 200 });
}

function actorLabel(actor: Actor): string {
  if (actor.kind === "person") return actor.personId;
  if (actor.kind === "anonymous") return actor.kind;
  return actor.kind === "key" ? actor.id : actor.job;
}
