import { randomBytes } from "node:crypto";
import { type NextRequest, NextResponse } from "next/server";
import { ASKED_PATH_HEADER } from "./lib/auth/asked-path";
import { contentSecurityPolicy } from "./lib/auth/content-security";

/**
 * Pages only: a fresh nonce for each, which Next puts on its own scripts. Routes of the API answer for themselves,
 * and the headers that never change are in next.config.ts.
 */
export function proxy(request: NextRequest): NextResponse {
  const nonce = randomBytes(16).toString("base64");
  const overHttps = (process.env.APP_URL ?? "").startsWith("https:");
  const development = process.env.NODE_ENV === "development";
  const policy = contentSecurityPolicy({ nonce, overHttps, development });
  const headers = new Headers(request.headers);
  headers.set("x-nonce", nonce);
  headers.set("Content-Security-Policy", policy);
  headers.set(ASKED_PATH_HEADER, request.nextUrl.pathname + request.nextUrl.search);
  const response = NextResponse.next({ request: { headers } });
  response.headers.set("Content-Security-Policy", policy);
  if (overHttps) response.headers.set("Strict-Transport-Security", "max-age=63072000; includeSubDomains");
  return response;
}

export const config = { matcher: "/((?!api/|_next/static|_next/image|icon.svg|favicon.ico).*)" };
