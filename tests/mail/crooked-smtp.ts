import { createServer, type Socket } from "node:net";

export type CrookedSmtp = { url: string; taken: string[]; stop: () => Promise<void> };

type Ways = {
  /** Reply to RCPT TO; "250 ok" where not given. */
  recipient?: string;
  /** Reply to the end of the message; null breaks the connection without one. */
  end?: string | null;
};

/** A mail server on loopback that keeps what it takes and then answers as badly as it is told to. */
export async function startCrookedSmtp({ recipient = "250 ok", end = "250 ok" }: Ways): Promise<CrookedSmtp> {
  const taken: string[] = [];
  const sockets = new Set<Socket>();
  const server = createServer((socket) => {
    sockets.add(socket);
    socket.on("close", () => sockets.delete(socket));
    socket.on("error", () => socket.destroy());
    converse(socket, taken, recipient, end);
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const address = server.address();
  if (address === null || typeof address === "string") throw new Error("No port");
  return {
    url: `smtp://127.0.0.1:${address.port}`,
    taken,
    stop: () =>
      new Promise((resolve) => {
        for (const socket of sockets) socket.destroy();
        server.close(() => resolve());
      }),
  };
}

function converse(socket: Socket, taken: string[], recipient: string, end: string | null): void {
  const say = (line: string) => socket.write(`${line}\r\n`);
  let pending = "";
  let inMessage = false;
  say("220 crooked");
  socket.on("data", (chunk) => {
    pending += chunk.toString("utf8");
    for (;;) {
      const stop = inMessage ? "\r\n.\r\n" : "\r\n";
      const at = pending.indexOf(stop);
      if (at < 0) return;
      const part = pending.slice(0, at);
      pending = pending.slice(at + stop.length);
      if (inMessage) {
        inMessage = false;
        taken.push(part);
        if (end === null) return void socket.destroy();
        say(end);
      } else if (/^DATA/i.test(part)) {
        inMessage = true;
        say("354 go on");
      } else if (/^RCPT/i.test(part)) say(recipient);
      else say("250 ok");
    }
  });
}
