import type { TestProject } from "vitest/node";
import { throwAwayFolder } from "../../db/server/folders.mjs";
import { startMailCatcher } from "../../db/server/mail-catcher.mjs";
import { startMariadb } from "../../db/server/mariadb.mjs";
import { describeTemplate } from "./template";

declare module "vitest" {
  interface ProvidedContext {
    mariadb: { url: string; ownerUrl: string; schemaStatements: string[] };
    smtpUrl: string;
    mailUrl: string;
  }
}

/** One MariaDB and one mail catcher for all test files of a run; each file then makes a schema of its own. */
export default async function startServices(project: TestProject) {
  const { folder, remove } = throwAwayFolder("test");
  const [mariadb, mail] = await Promise.all([startMariadb(folder, { fast: true }), startMailCatcher()]);
  const stop = async () => {
    await mail.stop();
    await mariadb.service.stop();
    remove();
  };
  try {
    const schemaStatements = await describeTemplate(mariadb.ownerUrl);
    project.provide("mariadb", { url: mariadb.url, ownerUrl: mariadb.ownerUrl, schemaStatements });
  } catch (error) {
    // A migration that fails must not leave a database behind that keeps the run from ending.
    await stop();
    throw error;
  }
  project.provide("smtpUrl", mail.smtpUrl);
  project.provide("mailUrl", mail.url);
  return stop;
}
