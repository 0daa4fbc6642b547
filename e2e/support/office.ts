import { type APIRequestContext, expect } from "@playwright/test";
import { eq, inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { cases } from "@/db/schema/cases";
import type { Role, Scope } from "@/lib/auth/codes";
import type { PersonActor } from "@/lib/context";
import type { Typology, Verdict } from "@/lib/decisions/codes";
import { addKey } from "@/lib/keys/add";
import { newId } from "@/lib/new-id";
import type { TransactionsView } from "@/lib/transactions/schema";
import { contextOf, makePerson } from "@/tests/support/people";
import type { SentPayment } from "./payments";

export type Person = PersonActor & { email: string };
type Owner = Pick<Person, "personId">;
export type OpenedCase = { caseId: string; number: number; transactionId: string; accountId: string };

/** What happens outside the browser under test: people join, payments come in, a supervisor acts through a key. */
export class Office {
  private readonly keys = new Map<string, Promise<string>>();

  constructor(
    readonly db: Database,
    private readonly request: APIRequestContext,
  ) {}

  /** Somebody of this test's own, with `TEST_PASSWORD`. */
  person(...roles: Role[]): Promise<Person> {
    return makePerson(this.db, roles);
  }

  /** Sends payments as the payment system would. @returns one result per payment, in order */
  async receive(payments: readonly SentPayment[]): Promise<TransactionsView["results"]> {
    const answer = await this.post("/api/transactions", { transactions: payments }, ["transactions:write"]);
    return ((await answer.json()) as TransactionsView).results;
  }

  /**
   * The same, where every payment is to open a case. Assigned to somebody of the test's own they stay the test's:
   * the queue hands them to nobody else.
   */
  async openCases(payments: readonly SentPayment[], owner: Owner | null = null): Promise<OpenedCase[]> {
    const results = await this.receive(payments);
    const caseIds = results.flatMap(({ caseId }) => caseId ?? []);
    expect(caseIds, `a case for each payment: ${JSON.stringify(results)}`).toHaveLength(payments.length);
    const rows = await this.db
      .select({ id: cases.id, number: cases.number })
      .from(cases)
      .where(inArray(cases.id, caseIds));
    const opened = results.map(({ caseId, transactionId }, index) => ({
      caseId: caseId as string,
      number: rows.find(({ id }) => id === caseId)?.number as number,
      transactionId: transactionId as string,
      accountId: payments[index]?.accountId as string,
    }));
    if (owner) await this.assign(opened, owner);
    return opened;
  }

  /** A supervisor decides a case, whoever has it. */
  async decide({ caseId }: OpenedCase, verdict: Verdict, typology: Typology | null = null): Promise<void> {
    const [row] = await this.db.select().from(cases).where(eq(cases.id, caseId));
    const finding = { verdict, typology, confidence: "sure" };
    await this.asSupervisor(`/api/cases/${caseId}/decision`, { ...finding, seenVersion: row?.revision });
  }

  async assign(opened: readonly OpenedCase[], person: Owner | null): Promise<void> {
    const caseIds = opened.map(({ caseId }) => caseId);
    await this.asSupervisor("/api/floor/assign", { caseIds, personId: person?.personId ?? null });
  }

  /** A supervisor's act through the API, behind the back of whoever is in the browser. */
  async asSupervisor(path: string, body: object): Promise<void> {
    await this.post(path, body, ["cases:decide"], "supervisor");
  }

  private async post(path: string, data: object, scopes: Scope[], actsFor?: Role) {
    const key = await this.keyFor(scopes, actsFor);
    const headers = { Authorization: `Bearer ${key}`, "Idempotency-Key": newId() };
    const answer = await this.request.post(path, { data, headers });
    expect(answer.ok(), `POST ${path} answered ${answer.status()}: ${await answer.text()}`).toBe(true);
    return answer;
  }

  private keyFor(scopes: Scope[], actsFor: Role | undefined): Promise<string> {
    const name = [...scopes, actsFor].join(" ");
    const made = this.keys.get(name) ?? this.makeKey(scopes, actsFor);
    this.keys.set(name, made);
    return made;
  }

  private async makeKey(scopes: Scope[], actsFor: Role | undefined): Promise<string> {
    const person = actsFor ? await this.person(actsFor) : null;
    const ctx = contextOf(this.db, { kind: "system", job: "browser tests" });
    const id = newId();
    const { secret } = await addKey(ctx, {
      name: `Browser tests ${id}`,
      source: `e2e-${id.slice(-12)}`,
      scopes,
      ...(person && { actsForPersonId: person.personId }),
    });
    return secret as string;
  }
}
