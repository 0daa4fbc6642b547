import { z } from "zod";

const Environment = z.object({
  PORT: z.coerce.number().int().min(1).max(65535).default(3000),
  CUPEL_DATA_DIR: z.string().min(1).default(".data"),
  DATABASE_URL: z.url({ protocol: /^(mysql|mariadb)$/ }),
  SMTP_URL: z.url({ protocol: /^smtps?$/ }),
  /** Sender of every message; without it an address at the host of APP_URL. */
  MAIL_FROM: z.email().optional(),
  AUTH_SECRET: z.string().min(32, "needs at least 32 characters"),
  APP_URL: z.url({ protocol: /^https?$/ }).default("http://localhost:3000"),
  CUPEL_DEMO: z.enum(["0", "1"]).default("0"),
  /** Proxies of ours in front of the app: how many addresses at the end of X-Forwarded-For are to be believed. */
  CUPEL_TRUSTED_PROXIES: z.coerce.number().int().min(0).max(10).default(0),
  /** Requests a minute for one person or key and process; far above what work by hand or a steady feed needs. */
  CUPEL_REQUESTS_PER_MINUTE: z.coerce.number().int().min(1).default(6_000),
  /** Sign-ins a minute from one address; each costs a slow hash and a trail entry. */
  CUPEL_SIGN_INS_PER_MINUTE: z.coerce.number().int().min(1).default(120),
  LOG_LEVEL: z.enum(["fatal", "error", "warn", "info", "debug", "trace", "silent"]).default("info"),
  CUPEL_ADMIN_EMAIL: z.email().optional(),
  CUPEL_ADMIN_PASSWORD: z.string().min(15, "needs at least 15 characters").optional(),
});
export type Environment = z.infer<typeof Environment>;

/** @throws Error with one line per variable that is missing or wrong; values are never repeated. */
export function readEnvironment(source: Record<string, string | undefined>): Environment {
  const result = Environment.safeParse(source);
  if (result.success) return result.data;
  const lines = result.error.issues.map((issue) => `${issue.path.join(".")}: ${issue.message}`);
  throw new Error(`The environment is not usable:\n${lines.join("\n")}`);
}

let cached: Environment | undefined;

export function environment(): Environment {
  cached ??= readEnvironment(process.env);
  return cached;
}
