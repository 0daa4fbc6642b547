/**
 * What a command has running, and the end of it: by a signal, by a service that dies, or by the body's return.
 * @typedef {object} Session
 * @property {AbortSignal} signal aborted once the command is to stop
 * @property {(name: string, stop: () => Promise<void> | void) => void} onEnd adds something to stop, last first
 * @property {(service: import("./processes.mjs").Service) => void} watch stops it at the end, and everything with it
 * @property {() => Promise<void>} untilStopped resolves when the command is to stop
 */

/**
 * Runs a command's body and stops, in reverse order, whatever it started.
 * @param {(session: Session) => Promise<number | void>} body answers the exit code
 * @returns {Promise<number>} exit code; 1 when a service died
 */
export async function runSession(body) {
  const controller = new AbortController();
  /** @type {{ name: string, stop: () => Promise<void> | void }[]} */
  const toStop = [];
  let died = false;
  let ending = false;

  const stopNow = () => controller.abort(new Error("The command was asked to stop."));
  const signals = /** @type {const} */ (["SIGINT", "SIGTERM", "SIGHUP"]);
  for (const name of signals) process.on(name, stopNow);

  /** @type {Session} */
  const session = {
    signal: controller.signal,
    onEnd: (name, stop) => void toStop.push({ name, stop }),
    watch: (service) => {
      toStop.push({ name: service.name, stop: () => service.stop() });
      void service.ended.then((how) => {
        if (ending || controller.signal.aborted) return;
        console.error(`\n${service.name} ended unexpectedly (${how}); stopping everything.`);
        died = true;
        stopNow();
      });
    },
    untilStopped: () =>
      new Promise((resolve) => {
        if (controller.signal.aborted) resolve();
        controller.signal.addEventListener("abort", () => resolve(), { once: true });
      }),
  };

  try {
    const code = (await body(session)) ?? 0;
    return died ? 1 : code;
  } catch (error) {
    if (!controller.signal.aborted) throw error;
    return died ? 1 : 130;
  } finally {
    ending = true;
    for (const { name, stop } of toStop.reverse()) {
      try {
        await stop();
      } catch (error) {
        console.error(`${name} did not stop:`, error);
      }
    }
    for (const name of signals) process.off(name, stopNow);
  }
}
