import { get } from "node:http";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { projectFolder } from "./folders.mjs";
import { startService } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

const next = path.join(projectFolder, "node_modules/next/dist/bin/next");
const startWaitMs = 120_000;

/**
 * Starts the app on loopback.
 * @param {NodeJS.ProcessEnv} env the app's, with its PORT
 * @param {{ dev?: boolean, output?: "inherit" | "ignore" | number }} [options]
 */
export function startApp(env, { dev = false, output } = {}) {
  const args = [next, dev ? "dev" : "start", "-H", "127.0.0.1", "-p", String(env.PORT)];
  const nodeEnv = dev ? "development" : "production";
  return startService("The app", process.execPath, args, {
    cwd: projectFolder,
    env: { ...env, NODE_ENV: nodeEnv },
    output,
    stopWaitMs: 20_000,
  });
}

/**
 * Waits until the app says that it is live.
 * @param {import("./processes.mjs").Service} service
 * @param {NodeJS.ProcessEnv} env the app's
 * @param {AbortSignal} [signal]
 */
export async function untilLive(service, env, signal) {
  const url = `http://127.0.0.1:${env.PORT}/api/health/live`;
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
    if (answer === 200) return;
    if (Date.now() > deadline) {
      throw new Refusal(
        `The app was not live after ${startWaitMs / 1000} s: ${url} answers ${answer ?? "nothing"}.`,
      );
    }
    await sleep(100);
  }
}

/**
 * Asks on a connection of its own: one kept alive would hold up the app's stop.
 * @param {string} url
 * @returns {Promise<number | undefined>} status, or undefined while nobody answers
 */
function answerOf(url) {
  return new Promise((resolve) => {
    const request = get(url, { agent: false, timeout: 10_000 }, (response) => {
      response.resume();
      resolve(response.statusCode);
    });
    request.once("timeout", () => request.destroy());
    request.once("error", () => resolve(undefined));
  });
}
