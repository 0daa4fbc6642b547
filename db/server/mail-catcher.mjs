import path from "node:path";
import { freePort, rememberedPort } from "./ports.mjs";

/**
 * @typedef {object} MailCatcher
 * @property {string} smtpUrl where the app sends
 * @property {string} url of the page where people read what was sent
 * @property {() => Promise<void>} stop
 */

/**
 * Starts the mail catcher inside this process, on loopback.
 * @param {string} [folder] the data folder, where caught mail and ports are kept; without it nothing is
 * @returns {Promise<MailCatcher>}
 */
export async function startMailCatcher(folder) {
  // Imported late: this file is loaded before the npm packages are there.
  const { MailDev } = await import("maildev");
  const kept = folder && path.join(folder, "mail");
  const smtp = folder ? await rememberedPort(path.join(folder, "smtp.port")) : await freePort();
  const web = folder ? await rememberedPort(path.join(folder, "mail.port")) : await freePort();
  const catcher = new MailDev({
    smtp,
    ip: "127.0.0.1",
    web,
    webIp: "127.0.0.1",
    silent: true,
    maxEmails: 1_000,
    ...(kept ? { mailDirectory: kept } : {}),
  });
  await catcher.start();
  return {
    smtpUrl: `smtp://127.0.0.1:${smtp}`,
    url: `http://127.0.0.1:${web}/index.html`,
    stop: () => catcher.stop(),
  };
}
