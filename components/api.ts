import type { z } from "zod";
import type { ENDPOINTS, EndpointKey } from "@/lib/endpoints";
import { newId } from "@/lib/new-id";

type InputOf<K extends EndpointKey> = z.input<(typeof ENDPOINTS)[K]["input"]>;
type OutputOf<K extends EndpointKey> = (typeof ENDPOINTS)[K]["output"] extends z.ZodType
  ? z.output<(typeof ENDPOINTS)[K]["output"]>
  : null;

export type FieldProblem = { path: string; message: string };

/** What the server refused, as RFC 9457 says it; `status` 0 means that no answer came. */
export class ApiProblem extends Error {
  constructor(
    readonly status: number,
    readonly code: string,
    detail: string,
    readonly errors: readonly FieldProblem[] = [],
  ) {
    super(detail);
    this.name = "ApiProblem";
  }

  /** The message for one field of a form, by its path in the input. */
  errorAt(path: string): string | undefined {
    return this.errors.find((error) => error.path === path)?.message;
  }
}

/** Asks the person for the password; resolves to true once signed in again. Set by the shell. */
let signInAgain: (() => Promise<boolean>) | null = null;

export function onSessionEnded(ask: (() => Promise<boolean>) | null): void {
  signInAgain = ask;
}

export type CallOptions = {
  signal?: AbortSignal;
  /** Give the same key to a repeated attempt; each call makes its own otherwise. */
  idempotencyKey?: string;
  /** Outlives the page that sends it. */
  keepalive?: boolean;
};

/**
 * Calls one route of the HTTP API by its key, typed by the endpoint table.
 * A session that ended asks for the password over the page and then goes on, so that nothing typed is lost.
 * 204 answers null. @throws ApiProblem
 */
export async function api<K extends EndpointKey>(
  key: K,
  input: InputOf<K>,
  options: CallOptions = {},
): Promise<OutputOf<K> | null> {
  const request = requestOf(key, input as Record<string, unknown>, options);
  let response = await answerOf(request);
  if (response.status === 401 && signInAgain && (await signInAgain())) response = await answerOf(request);
  if (!response.ok) throw await problemOf(response);
  if (response.status === 204) return null;
  return (await response.json()) as OutputOf<K>;
}

/** Where a GET route of the API is, for links to downloads and for EventSource. */
export function apiPath<K extends EndpointKey & `GET ${string}`>(key: K, input: InputOf<K>): string {
  return requestOf(key, input as Record<string, unknown>, {}).path;
}

type ApiRequest = { path: string; init: RequestInit };

function requestOf(key: EndpointKey, input: Record<string, unknown>, options: CallOptions): ApiRequest {
  const [method = "GET", template = ""] = key.split(" ");
  const rest = { ...input };
  const path = template.replace(/\{(\w+)\}/g, (_, name: string) => {
    const value = String(rest[name]);
    delete rest[name];
    return encodeURIComponent(value);
  });
  const signal = options.signal ?? null;
  if (method === "GET") {
    const query = new URLSearchParams();
    for (const [name, value] of Object.entries(rest)) {
      if (value !== undefined && value !== null && value !== "") query.set(name, String(value));
    }
    return { path: query.size > 0 ? `${path}?${query}` : path, init: { signal } };
  }
  const headers: Record<string, string> = { "Content-Type": "application/json" };
  if (method === "POST") headers["Idempotency-Key"] = options.idempotencyKey ?? newId();
  const keepalive = options.keepalive ?? false;
  return { path, init: { method, headers, signal, keepalive, body: JSON.stringify(rest) } };
}

async function answerOf({ path, init }: ApiRequest): Promise<Response> {
  try {
    return await fetch(path, init);
  } catch (error) {
    if (init.signal?.aborted) throw error;
    throw noAnswer();
  }
}

async function problemOf(response: Response): Promise<ApiProblem> {
  return problemFrom(response.status, response.headers.get("Content-Type"), await response.text());
}

export const noAnswer = () =>
  new ApiProblem(0, "no_answer", "No answer from the server. Check the connection and try again.");

/** What an answer that is no success says. */
export function problemFrom(status: number, contentType: string | null, text: string): ApiProblem {
  const plain = `The server answered ${status}.`;
  if (!contentType?.includes("json")) return new ApiProblem(status, "unknown", plain);
  const body = JSON.parse(text) as { code?: string; detail?: string; errors?: FieldProblem[] };
  return new ApiProblem(status, body.code ?? "unknown", body.detail ?? plain, body.errors ?? []);
}
