import type { TestProject } from "vitest/node";
import { type AppFacts, startApp } from "./app";
import { describeTemplate } from "./template";

declare module "vitest" {
  interface ProvidedContext {
    app: AppFacts;
  }
}

/** One built app for all test files that speak HTTP, on an empty database; `inject("app")` says where. */
export default async function startSharedApp(project: TestProject) {
  const app = await startApp();
  const { url, databaseUrl, ownerUrl, smtpUrl, mailUrl, pid } = app;
  project.provide("app", { url, databaseUrl, ownerUrl, smtpUrl, mailUrl, pid });
  project.provide("smtpUrl", smtpUrl);
  project.provide("mailUrl", mailUrl);
  const schemaStatements = await describeTemplate(ownerUrl);
  project.provide("mariadb", { url: databaseUrl, ownerUrl, schemaStatements });
  return app.stop;
}
