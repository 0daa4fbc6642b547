import type { NextConfig } from "next";

const config: NextConfig = {
  poweredByHeader: false,
  reactStrictMode: true,
  // Native or worker-spawning packages stay outside the bundle.
  serverExternalPackages: ["@node-rs/argon2", "mysql2", "pino"],
  // Pages answer 403 by throwing `forbidden()`, which Next still keeps behind this switch.
  experimental: { authInterrupts: true },
  // The checks build beside a running installation, not over it.
  distDir: process.env.CUPEL_BUILD_DIR ?? ".next",
  turbopack: { root: import.meta.dirname },
};

export default config;
