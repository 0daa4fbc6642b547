import { get } from "node:http";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { projectFolder } from "./folders.mjs";
import { startService } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

const next = path.join(projectFolder, "node_modules/next/dist/bin/next");
// A request makes several megabytes of rows and queries that nobody needs a moment later; with more room for them most
// are gone before they would be copied, and decisions are not held up by it.
const roomForShortLived = "--max-semi-space-size=64";
const startWaitMs = 120_000;

/**
 * Starts the app on loopback.
 * @param {NodeJS.ProcessEnv} env the app's, with its PORT
 * @param {{ dev?: boolean, output?: "inherit" | "ignore" | number }} [options]
 */
export function startApp(env, { dev = false, output } = {}) {
  const args = [roomForShortLived, next, dev ? "dev" : "start", "-H", "127.0.0.1", "-p", String(env.PORT)];
  const nodeEnv = dev ? "development" : "production";
  return startService("The app", process.execPath, args, {
    cwd: projectFolder,
    env: { ...env, NODE_ENV: nodeEnv },
    output,
    stopWaitMs: 20_000,
  });
}

/**
 * Waits until the process answers.
 * @param {import("./processes.mjs").Service} service
 * @param {NodeJS.ProcessEnv} env the app's
 * @param {AbortSignal} [signal]
 */
export const untilLive = (service, env, signal) =>
  untilSaid(service, env, signal, "/api/health/live", ({ status }) => status === 200);

/**
 * Waits until the app takes requests: its database is migrated, and a policy and a scorer are in use. Mail may be away.
 * @param {import("./processes.mjs").Service} service
 * @param {NodeJS.ProcessEnv} env the app's
 * @param {AbortSignal} [signal]
 */
export const untilReady = (service, env, signal) =>
  untilSaid(service, env, signal, "/api/health/ready", ({ body }) => /"installed":true/.test(body));

/** @typedef {{ status?: number, body: string }} Answer */

/**
 * @param {import("./processes.mjs").Service} service
 * @param {NodeJS.ProcessEnv} env
 * @param {AbortSignal | undefined} signal
 * @param {string} path
 * @param {(answer: Answer) => boolean} isSaid
 */
async function untilSaid(service, env, signal, path, isSaid) {
  const url = `http://127.0.0.1:${env.PORT}${path}`;
  /** @type {string | undefined} */
  let ended;
  void service.ended.then((how) => {
    ended = how;
  });
  const deadline = Date.now() + startWaitMs;
  for (;;) {
    signal?.throwIfAborted();
    if (ended) throw new Refusal(`The app did not start (${ended}); its messages are above.`);
    const answer = await answerOf(url);
    if (isSaid(answer)) return;
    if (Date.now() > deadline) {
      throw new Refusal(
        `The app did not get ready within ${startWaitMs / 1000} s: ${url} answers ${answer.status ?? "nothing"} ${answer.body}`,
      );
    }
    await sleep(100);
  }
}

/**
 * Asks on a connection of its own: one kept alive would hold up the app's stop.
 * @param {string} url
 * @returns {Promise<Answer>} without a status while nobody answers
 */
function answerOf(url) {
  return new Promise((resolve) => {
    const request = get(url, { agent: false, timeout: 10_000 }, (response) => {
      let body = "";
      response.setEncoding("utf8").on("data", (text) => {
        body += text;
      });
      response.once("end", () => resolve({ status: response.statusCode, body }));
      response.once("error", () => resolve({ body: "" }));
    });
    request.once("timeout", () => request.destroy());
    request.once("error", () => resolve({ body: "" }));
  });
}
