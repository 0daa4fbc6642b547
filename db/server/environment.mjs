import { keptSecret } from "./secrets.mjs";

/**
 * The environment of the app and of scripts: the person's own settings, and ours where they set nothing.
 * @param {object} facts
 * @param {NodeJS.ProcessEnv} facts.env the person's environment
 * @param {string} facts.folder the data folder
 * @param {number} facts.port the app's
 * @param {string} facts.databaseUrl
 * @param {string} facts.smtpUrl
 * @returns {NodeJS.ProcessEnv}
 */
export function appEnvironment({ env, folder, port, databaseUrl, smtpUrl }) {
  const secret = env.AUTH_SECRET || keptSecret(folder, "auth");
  const appUrl = env.APP_URL || `http://localhost:${port}`;
  return {
    ...env,
    PORT: String(port),
    CUPEL_DATA_DIR: folder,
    DATABASE_URL: databaseUrl,
    SMTP_URL: smtpUrl,
    AUTH_SECRET: secret,
    NEXTAUTH_SECRET: secret,
    APP_URL: appUrl,
    NEXTAUTH_URL: appUrl,
    AUTH_TRUST_HOST: "1",
    CUPEL_DEMO: env.CUPEL_DEMO || (env.DATABASE_URL ? "0" : "1"),
    NEXT_TELEMETRY_DISABLED: "1",
  };
}

/**
 * @param {NodeJS.ProcessEnv} env
 * @returns {number | undefined} undefined where PORT is not a port number
 */
export function portFrom(env) {
  const port = Number(env.PORT || 3000);
  return Number.isInteger(port) && port >= 1 && port <= 65_535 ? port : undefined;
}

const ownSettings =
  /^(PORT|APP_URL|DATABASE_URL|SMTP_URL|AUTH_SECRET|AUTH_TRUST_HOST|NODE_ENV|NEXTAUTH_.*|CUPEL_(?!STREAM|SCORER_SETS|BUILD_DIR).*)$/;

/**
 * The environment of checks and benchmarks: without the person's own settings, so that nothing of theirs is
 * touched, and with a build folder beside that of `npm start`.
 * @param {NodeJS.ProcessEnv} env
 * @returns {NodeJS.ProcessEnv}
 */
export function checkEnvironment(env) {
  /** @type {NodeJS.ProcessEnv} */
  const kept = { ...env, CUPEL_BUILD_DIR: ".next-test", NEXT_TELEMETRY_DISABLED: "1" };
  for (const name of Object.keys(env)) {
    if (ownSettings.test(name)) delete kept[name];
  }
  return kept;
}
