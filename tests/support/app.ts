import { closeSync, existsSync, openSync, readFileSync } from "node:fs";
import path from "node:path";
import { startApp as startNext, untilLive, untilReady } from "../../db/server/app.mjs";
import { buildApp, isBuildFresh } from "../../db/server/build.mjs";
import { ensureDemoData, migrate } from "../../db/server/database.mjs";
import { appEnvironment, checkEnvironment } from "../../db/server/environment.mjs";
import { throwAwayFolder } from "../../db/server/folders.mjs";
import { startMailCatcher } from "../../db/server/mail-catcher.mjs";
import { startMariadb } from "../../db/server/mariadb.mjs";
import { freePort } from "../../db/server/ports.mjs";

type Services = { databaseUrl: string; ownerUrl: string; smtpUrl: string; mailUrl: string };
export type AppFacts = Services & { url: string; pid: number };
export type RunningApp = AppFacts & {
  /** Everything the app has printed. */
  output: () => string;
  stop: () => Promise<void>;
};

type Options = {
  /** Settings of the app beside its own; `CUPEL_DEMO: "1"` makes the demo data first. */
  env?: Record<string, string>;
  /** MariaDB as in production, for benchmarks; tests give durability up. */
  durable?: boolean;
  /** Not for a process whose database has not been migrated. */
  untilInstalled?: boolean;
  /** A further process on the database and mail catcher of an app that runs already. */
  beside?: AppFacts;
};

/** Starts the built app (building it first where that is stale) with a database and mail catcher of its own. */
export async function startApp({
  env = {},
  durable = false,
  untilInstalled = true,
  beside,
}: Options = {}): Promise<RunningApp> {
  const base = { ...checkEnvironment(process.env), CUPEL_DEMO: "0", ...env };
  if (!isBuildFresh(base) && (await buildApp(base)) !== 0) throw new Error("The build failed");

  const { folder, remove } = throwAwayFolder("app");
  const toStop: (() => Promise<void> | void)[] = [remove];
  const stop = async () => {
    for (const one of toStop.splice(0).reverse()) await one();
  };
  try {
    const services = beside ?? (await startServices(folder, durable, toStop));
    const { app, url, output } = await startOn(services, folder, base);
    toStop.push(app.stop);
    await (untilInstalled ? untilReady : untilLive)(app, { ...base, PORT: new URL(url).port });
    return { ...services, url, pid: app.identity.pid, output, stop };
  } catch (error) {
    const printed = printedIn(folder);
    await stop();
    throw new Error(`The app did not start:\n${printed}`, { cause: error });
  }
}

async function startServices(
  folder: string,
  durable: boolean,
  toStop: (() => Promise<void> | void)[],
): Promise<Services> {
  const mariadb = await startMariadb(folder, { fast: !durable });
  toStop.push(() => mariadb.service.stop());
  const mail = await startMailCatcher();
  toStop.push(mail.stop);
  return { databaseUrl: mariadb.url, ownerUrl: mariadb.ownerUrl, smtpUrl: mail.smtpUrl, mailUrl: mail.url };
}

async function startOn(
  { databaseUrl, ownerUrl, smtpUrl }: Services,
  folder: string,
  base: NodeJS.ProcessEnv,
) {
  const { signal } = new AbortController();
  const env = appEnvironment({ env: base, folder, port: await freePort(), databaseUrl, smtpUrl });
  await migrate(env, ownerUrl, signal);
  await ensureDemoData({ folder, env, embedded: false, signal });
  const log = openSync(logOf(folder), "a");
  const app = startNext(env, { output: log });
  closeSync(log);
  return { app, url: env.APP_URL ?? "", output: () => printedIn(folder) };
}

const logOf = (folder: string) => path.join(folder, "app.log");

function printedIn(folder: string): string {
  return existsSync(logOf(folder)) ? readFileSync(logOf(folder), "utf8") : "";
}
