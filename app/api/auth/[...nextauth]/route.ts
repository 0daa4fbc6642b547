import type { NextRequest } from "next/server";
import NextAuth from "next-auth";
import { authOptions } from "@/lib/auth/next-auth";

type Arguments = { params: Promise<{ nextauth: string[] }> };

/** The one route outside the common door: next-auth's own protocol of sign-in, renewal and sign-out. */
const handler = (request: NextRequest, context: Arguments): Promise<Response> =>
  NextAuth(request, context, authOptions());

export { handler as GET, handler as POST };
