import { rmSync } from "node:fs";
import { parseArgs } from "node:util";
import { startApp, untilReady } from "../server/app.mjs";
import { buildApp, isBuildFresh } from "../server/build.mjs";
import { ensureDemoData, migrate, openDatabase } from "../server/database.mjs";
import { appEnvironment, checkEnvironment, portFrom } from "../server/environment.mjs";
import { dataFolder } from "../server/folders.mjs";
import { startMailCatcher } from "../server/mail-catcher.mjs";
import { ensureMariadb } from "../server/mariadb.mjs";
import { occupy } from "../server/occupancy.mjs";
import { checkNode, ensurePackages } from "../server/packages.mjs";
import { readPeople } from "../server/people.mjs";
import { isPortFree } from "../server/ports.mjs";
import { Refusal, runCommand } from "../server/refusal.mjs";
import { runSession } from "../server/session.mjs";
import { printWelcome } from "../server/welcome.mjs";

const { values: options } = parseArgs({
  options: { dev: { type: "boolean", default: false }, "throw-away": { type: "string" } },
});
const { dev, "throw-away": throwAway } = options;

/** `--throw-away <folder>`, for checks: a data folder that goes at the end, and none of the person's settings. */
const env = throwAway
  ? { ...checkEnvironment(process.env), PORT: process.env.PORT, CUPEL_DATA_DIR: throwAway }
  : process.env;

/** @param {import("../server/session.mjs").Session} session */
async function start(session) {
  const { signal } = session;
  checkNode();
  const port = portFrom(env);
  if (port === undefined) throw new Refusal("PORT must be a whole number from 1 to 65535.");

  const folder = dataFolder(env);
  if (throwAway)
    session.onEnd("The throw-away folder", () => rmSync(folder, { recursive: true, force: true }));
  const occupancy = await occupy(folder, dev ? "npm run dev" : "npm start");
  session.onEnd("The data folder's record", occupancy.leave);
  if (!(await isPortFree(port))) throw new Refusal(`Port ${port} is taken. Set PORT to another one.`);

  const fresh = !dev && isBuildFresh(env);
  if (!env.DATABASE_URL) await ensureMariadb();
  await ensurePackages({ forBuilding: !fresh, signal });

  const { url, ownerUrl, mariadb } = await openDatabase({
    folder,
    env,
    session,
    occupancy,
    fast: throwAway !== undefined,
  });
  const mail = env.SMTP_URL ? undefined : await startMailCatcher(folder);
  if (mail) session.onEnd("The mail catcher", mail.stop);
  const smtpUrl = mail?.smtpUrl ?? env.SMTP_URL ?? "";
  const appEnv = appEnvironment({ env, folder, port, databaseUrl: url, smtpUrl });

  await migrate(appEnv, ownerUrl, signal);
  await ensureDemoData({ folder, env: appEnv, embedded: mariadb !== undefined, signal });
  if (!dev && !fresh) {
    console.log("Building the app …");
    if ((await buildApp(env, signal)) !== 0) throw new Refusal("The build failed; its messages are above.");
  }

  const app = startApp(appEnv, { dev });
  session.watch(app);
  occupancy.addChild(app);
  await untilReady(app, appEnv, signal);
  occupancy.note({ appUrl: appEnv.APP_URL, smtpUrl, mailUrl: mail?.url });
  printWelcome({ appUrl: appEnv.APP_URL ?? "", mailUrl: mail?.url, people: await readPeople(url) });

  await session.untilStopped();
  console.log("\nStopping …");
  return 0;
}

await runCommand(async () => {
  const code = await runSession(start);
  if (code === 0) console.log(throwAway ? "Stopped." : "Stopped. The data is kept.");
  return code;
});
