import "server-only";
import { desc, sql } from "drizzle-orm";
import { bigint, mysqlTable } from "drizzle-orm/mysql-core";
import { createTransport } from "nodemailer";
import type { Database } from "@/db/client";
import journal from "@/db/migrations/meta/_journal.json";
import type { Context } from "./context";
import { environment } from "./env";
import { isInstalled } from "./installed";
import { log } from "./log";
import type { Readiness } from "./platform-endpoints";

/** A mail server that says nothing for this long counts as gone. */
const MAIL_WAIT_MS = 3_000;

const applied = mysqlTable("__drizzle_migrations", { createdAt: bigint("created_at", { mode: "number" }) });

export async function readLiveness(): Promise<{ live: true }> {
  return { live: true };
}

/** 503 while anything is missing, so that a load balancer sends nobody here. */
export async function readReadiness(ctx: Context): Promise<Response> {
  const [database, migrations, mail] = await Promise.all([
    holds("database", () => ctx.db.execute(sql`select 1`)),
    holds("migrations", () => refuseOldSchema(ctx.db)),
    holds("mail", () => greetMailServer(environment().SMTP_URL)),
  ]);
  const installed = isInstalled();
  const readiness: Readiness = { database, migrations, installed, mail };
  return Response.json(readiness, { status: database && migrations && installed && mail ? 200 : 503 });
}

async function holds(part: string, check: () => Promise<unknown>): Promise<boolean> {
  try {
    await check();
    return true;
  } catch (error) {
    log.warn({ part, err: error }, "not ready");
    return false;
  }
}

/** @throws Error while the database lacks migrations that this code needs */
export async function refuseOldSchema(db: Database): Promise<void> {
  const newest = Math.max(...journal.entries.map((entry) => entry.when));
  const [last] = await db.select().from(applied).orderBy(desc(applied.createdAt)).limit(1);
  if (!last?.createdAt || last.createdAt < newest) throw new Error("The database is behind its migrations");
}

async function greetMailServer(url: string): Promise<void> {
  const transport = createTransport({
    url,
    connectionTimeout: MAIL_WAIT_MS,
    greetingTimeout: MAIL_WAIT_MS,
    socketTimeout: MAIL_WAIT_MS,
  });
  try {
    await transport.verify();
  } finally {
    transport.close();
  }
}
