import { createHash, randomBytes } from "node:crypto";
import type { Database } from "@/db/client";
import { apiKeys, people, personRoles } from "@/db/schema/people";
import type { Role, Scope } from "@/lib/auth/codes";
import { newId } from "@/lib/new-id";

export type Answer<T> = { status: number; ms: number; body: T };

/** Calls of the product's own HTTP API with one key, each timed from the outside. */
export class Api {
  constructor(
    private readonly url: string,
    private readonly key: string,
  ) {}

  get<T>(path: string): Promise<Answer<T>> {
    return this.call<T>("GET", path);
  }

  post<T>(path: string, body: unknown): Promise<Answer<T>> {
    return this.call<T>("POST", path, body);
  }

  /** As `post`, but anything else than a success is the benchmark's failure. */
  async mustPost<T>(path: string, body: unknown): Promise<T> {
    const answer = await this.post<T>(path, body);
    if (answer.status >= 300) {
      throw new Error(`POST ${path} answered ${answer.status}: ${JSON.stringify(answer.body)}`);
    }
    return answer.body;
  }

  private async call<T>(method: string, path: string, body?: unknown): Promise<Answer<T>> {
    const startedMs = performance.now();
    const response = await fetch(this.url + path, {
      method,
      headers: {
        Authorization: `Bearer ${this.key}`,
        ...(body !== undefined && { "Content-Type": "application/json" }),
        ...(method === "POST" && { "Idempotency-Key": newId() }),
      },
      ...(body !== undefined && { body: JSON.stringify(body) }),
    });
    const text = await response.text();
    const ms = performance.now() - startedMs;
    return { status: response.status, ms, body: (text ? JSON.parse(text) : null) as T };
  }
}

/** A key on the benchmark's own database, acting for a new person where roles are given. */
export async function insertKey(db: Database, scopes: Scope[], roles: Role[] = []): Promise<string> {
  const key = `bench_${randomBytes(24).toString("hex")}`;
  const now = new Date();
  const personId = roles.length > 0 ? newId() : null;
  if (personId) {
    await db.insert(people).values({
      id: personId,
      email: `${personId}@bench.example`,
      name: `Person ${personId.slice(-4)}`,
      passwordHash: "never signs in",
      createdAt: now,
    });
    await db.insert(personRoles).values(roles.map((role) => ({ personId, role, grantedAt: now })));
  }
  await db.insert(apiKeys).values({
    id: newId(),
    name: `bench ${newId()}`,
    source: "bench",
    hash: createHash("sha256").update(key).digest(),
    scopes,
    actsForPersonId: personId,
    createdAt: now,
  });
  return key;
}
