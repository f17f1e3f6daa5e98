/** Every event stream that is open in this process, so that shutdown can end them: a server with an open stream never stops. */
const held = globalThis as unknown as { tillwaterStreams?: Set<() => void> };

function open(): Set<() => void> {
  held.tillwaterStreams ??= new Set();
  return held.tillwaterStreams;
}

/** Ends every open stream. */
export function closeStreams(): void {
  for (const close of [...open()]) close();
}

export function openStreamCount(): number {
  return open().size;
}

export interface EventSink {
  send(event: string, data: unknown): void;
  close(): void;
}

/**
 * A text/event-stream response.
 *
 * @param begin starts whatever feeds the stream; answers what stops it
 */
export function eventStream(request: Request, begin: (sink: EventSink) => Promise<() => void>): Response {
  const encoder = new TextEncoder();
  let close = () => {};
  const body = new ReadableStream<Uint8Array>({
    async start(controller) {
      let stop: (() => void) | null = null;
      let closed = false;
      close = () => {
        if (closed) return;
        closed = true;
        open().delete(close);
        stop?.();
        try {
          controller.close();
        } catch {
          // the reader has gone and taken the stream with it
        }
      };
      open().add(close);
      request.signal.addEventListener('abort', close, { once: true });
      const send = (event: string, data: unknown) => {
        if (!closed) controller.enqueue(encoder.encode(`event: ${event}\ndata: ${JSON.stringify(data)}\n\n`));
      };
      stop = await begin({ send, close });
      if (closed) stop();
    },
    cancel: () => close(),
  });
  return new Response(body, {
    headers: { 'content-type': 'text/event-stream', 'cache-control': 'no-cache, no-transform', 'x-accel-buffering': 'no' },
  });
}
