import type { NextConfig } from "next";

/** On every answer; what changes with the request or the installation (nonce, HSTS) is in proxy.ts. */
const COMMON_HEADERS = [
  { key: "X-Content-Type-Options", value: "nosniff" },
  { key: "Referrer-Policy", value: "same-origin" },
  { key: "Permissions-Policy", value: "camera=(), microphone=(), geolocation=(), payment=(), usb=()" },
  { key: "Cross-Origin-Opener-Policy", value: "same-origin" },
  { key: "Cross-Origin-Resource-Policy", value: "same-origin" },
];
const API_POLICY = { key: "Content-Security-Policy", value: "default-src 'none'; frame-ancestors 'none'" };

const config: NextConfig = {
  poweredByHeader: false,
  reactStrictMode: true,
  // Native or worker-spawning packages stay outside the bundle.
  serverExternalPackages: ["@node-rs/argon2", "mysql2", "pino"],
  // Pages answer 403 by throwing `forbidden()`, which Next still keeps behind this switch.
  experimental: { authInterrupts: true },
  // `npm test` checks the types as a step of its own; a start needs no second look, nor the tests' packages.
  typescript: { ignoreBuildErrors: true },
  // The checks build beside a running installation, not over it.
  distDir: process.env.CUPEL_BUILD_DIR ?? ".next",
  // Browsers ask for it unbidden where they have not seen the page's own icon yet.
  rewrites: async () => [{ source: "/favicon.ico", destination: "/icon.svg" }],
  headers: async () => [
    { source: "/:path*", headers: COMMON_HEADERS },
    { source: "/api/:path*", headers: [API_POLICY] },
  ],
  turbopack: { root: import.meta.dirname },
};

export default config;
