import type { IncomingMessage, ServerResponse } from "node:http";

const MOST_BODY = 20 * 1024 * 1024;

/** The whole body as text. @throws Error in words if it is over 20 MB. */
export async function bodyText(request: IncomingMessage): Promise<string> {
  const parts: Buffer[] = [];
  let size = 0;
  for await (const part of request as AsyncIterable<Buffer>) {
    size += part.length;
    if (size > MOST_BODY) throw new Error("The request is too large: over 20 MB.");
    parts.push(part);
  }
  return Buffer.concat(parts).toString("utf8");
}

/** Node's request as the standard one that the window server answers. */
export function standardRequest(request: IncomingMessage, origin: string): Request {
  const headers = new Headers();
  if (request.headers.range !== undefined) headers.set("range", request.headers.range);
  return new Request(new URL(request.url ?? "/", origin), { method: request.method ?? "GET", headers });
}

/** Send a standard response through Node's. */
export async function sendResponse(response: Response, to: ServerResponse): Promise<void> {
  to.writeHead(response.status, Object.fromEntries(response.headers));
  to.end(new Uint8Array(await response.arrayBuffer()));
}
