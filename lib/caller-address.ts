import "server-only";
import { subscribe } from "node:diagnostics_channel";
import type { IncomingMessage } from "node:http";

const HEADER = "x-forwarded-for";

/**
 * Where a request came from. The last address is the one that our own socket saw; each proxy of ours in front of it
 * has added the one it saw before. What stands further left was sent along by a stranger and means nothing.
 * @param forwarded X-Forwarded-For with the socket's own address at its end
 */
export function callerAddress(forwarded: string, trustedProxies: number): string {
  const addresses = forwarded.split(",").map((address) => address.trim());
  return addresses.at(-1 - trustedProxies) ?? addresses[0] ?? "";
}

/**
 * Lets every request carry its socket's address at the end of X-Forwarded-For, as a proxy would: a handler sees
 * nothing of the socket, and Next fills the header in only where the caller has sent none.
 */
export function noteSocketAddresses(): void {
  subscribe("http.server.request.start", (message) => {
    const { headers, socket } = (message as { request: IncomingMessage }).request;
    const sent = headers[HEADER];
    const seen = socket.remoteAddress ?? "unknown";
    headers[HEADER] = sent ? `${sent}, ${seen}` : seen;
  });
}
