import "server-only";

const HEARTBEAT_MS = 15_000;
/** A reader so far behind is let go; it comes back with the last id it saw. */
const MOST_UNREAD = 1_000;

export type EventSender = {
  /** @param id what a reader that comes back names as the last it saw */
  send: (event: string, id: number, data: unknown) => void;
  close: () => void;
};

// Open streams would keep a stopping server alive. One hook a process, whichever copy of this module comes first.
const shared = globalThis as typeof globalThis & { cupelOpenStreams?: Set<() => void> };

function closeAtShutdown(close: () => void): () => void {
  if (!shared.cupelOpenStreams) {
    const streams = new Set<() => void>();
    shared.cupelOpenStreams = streams;
    process.once("SIGTERM", () => {
      for (const end of [...streams]) end();
    });
  }
  const streams = shared.cupelOpenStreams;
  streams.add(close);
  return () => streams.delete(close);
}

export const EVENT_STREAM_HEADERS = {
  "Content-Type": "text/event-stream; charset=utf-8",
  "Cache-Control": "no-store, no-transform",
  // Proxies that gather an answer before they pass it on would hold events back.
  "X-Accel-Buffering": "no",
} as const;

/**
 * An answer of Server-Sent Events (WHATWG HTML, section 9.2).
 * @param open starts sending and returns what ends it; called once
 * @param stillWelcome asked at every heartbeat; false closes the stream
 */
export function eventStream(
  signal: AbortSignal,
  open: (sender: EventSender) => () => void,
  stillWelcome: () => Promise<boolean>,
): Response {
  const encoder = new TextEncoder();
  let end = () => {};
  const stream = new ReadableStream<Uint8Array>({
    start(controller) {
      let closed = false;
      const write = (text: string) => {
        if (closed) return;
        controller.enqueue(encoder.encode(text));
        if ((controller.desiredSize ?? 0) < -MOST_UNREAD) close();
      };
      const heartbeat = setInterval(() => {
        write(": still here\n\n");
        stillWelcome().then((welcome) => welcome || close(), close);
      }, HEARTBEAT_MS).unref();
      let stop = () => {};
      const close = () => {
        if (closed) return;
        closed = true;
        clearInterval(heartbeat);
        forget();
        signal.removeEventListener("abort", close);
        stop();
        controller.close();
      };
      const forget = closeAtShutdown(close);
      end = close;
      signal.addEventListener("abort", close);
      write(": open\n\n");
      stop = open({
        send: (event, id, data) => write(`id: ${id}\nevent: ${event}\ndata: ${JSON.stringify(data)}\n\n`),
        close,
      });
      if (signal.aborted) close();
    },
    cancel: () => end(),
  });
  return new Response(stream, { headers: EVENT_STREAM_HEADERS });
}
