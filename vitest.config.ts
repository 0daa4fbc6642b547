import { fileURLToPath } from "node:url";
import { defineConfig } from "vitest/config";

// An odd zone, 12:45 or 13:45 ahead, set before the workers start: code that leans on the machine's zone fails here.
process.env.TZ = "Pacific/Chatham";

const emptyModule = fileURLToPath(
  new URL("./node_modules/next/dist/compiled/server-only/empty.js", import.meta.url),
);

export default defineConfig({
  resolve: {
    alias: [
      { find: /^server-only$/, replacement: emptyModule },
      { find: /^@\//, replacement: fileURLToPath(new URL("./", import.meta.url)) },
    ],
  },
  oxc: { jsx: { runtime: "automatic" } },
  test: {
    maxWorkers: 2,
    testTimeout: 120_000,
    hookTimeout: 60_000,
    projects: [
      {
        extends: true,
        test: {
          name: "unit",
          include: ["tests/**/*.test.{ts,tsx}"],
          exclude: ["tests/bench/**", "tests/http/**"],
          setupFiles: ["tests/support/quiet-console.ts"],
          globalSetup: ["tests/support/services.ts"],
        },
      },
      {
        extends: true,
        test: {
          name: "http",
          include: ["tests/http/**/*.test.ts"],
          setupFiles: ["tests/support/quiet-console.ts"],
          globalSetup: ["tests/support/running-app.ts"],
        },
      },
    ],
  },
});
