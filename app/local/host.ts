import { randomBytes, timingSafeEqual } from "node:crypto";
import { createServer, type IncomingMessage, type Server, type ServerResponse } from "node:http";
import type { AddressInfo } from "node:net";
import type { Shell } from "../shell/contract.ts";
import type { FileRegistry } from "../shell/file-registry.ts";
import { PAGE_HEADERS } from "../shell/security.ts";
import { answerShellCall } from "../shell/shell.ts";
import { windowServer } from "../shell/window-server.ts";
import { bodyText, sendResponse, standardRequest } from "./request.ts";

export interface LocalHost {
  /** Address with the token; whoever has it can use the window. */
  readonly url: string;
  readonly port: number;
  close(): Promise<void>;
}

function same(given: string | undefined, secret: string): boolean {
  const a = Buffer.from(given ?? "");
  const b = Buffer.from(secret);
  return a.length === b.length && timingSafeEqual(a, b);
}

function plain(to: ServerResponse, status: number, words: string): void {
  to.writeHead(status, { ...PAGE_HEADERS, "content-type": "text/plain; charset=utf-8" });
  to.end(`${words}\n`);
}

/** Text of an error for the window; stacks and paths of this program stay here. */
function wordsOf(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

/**
 * Serve the built window on 127.0.0.1 alone, where Electron cannot be had.
 *
 * The page is given only to an address that carries the token; the shell's calls only to a page that sends it back; files
 * only by ids that cannot be guessed. Requests that name another host or come from another site's page are refused, so that
 * no page elsewhere can reach in.
 *
 * @param port 0 = any free port.
 */
export async function startLocalHost(
  folder: string,
  registry: FileRegistry,
  shell: Shell,
  port = 0,
): Promise<LocalHost> {
  const token = randomBytes(24).toString("base64url");
  const serve = windowServer(folder, registry, (html) =>
    html.replace('name="isohypse-token" content=""', `name="isohypse-token" content="${token}"`),
  );
  let host = "";

  async function shellCall(request: IncomingMessage, response: ServerResponse, call: string): Promise<void> {
    const given = request.headers["x-isohypse-token"];
    if (!same(Array.isArray(given) ? given[0] : given, token))
      return plain(response, 403, "The token is wrong or missing.");
    let answer: unknown;
    try {
      const args: unknown = JSON.parse((await bodyText(request)) || "[]");
      if (!Array.isArray(args)) throw new Error("Arguments come as a list.");
      answer = await answerShellCall(shell, call, args);
    } catch (error) {
      return plain(response, 400, wordsOf(error));
    }
    response.writeHead(200, { ...PAGE_HEADERS, "content-type": "application/json; charset=utf-8" });
    response.end(JSON.stringify(answer ?? null));
  }

  async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const site = request.headers["sec-fetch-site"];
    const origin = request.headers.origin;
    if (request.headers.host !== host) return plain(response, 421, "This is not the address of this window.");
    if (origin !== undefined && origin !== `http://${host}`)
      return plain(response, 403, "Requests from other pages are refused.");
    const url = new URL(request.url ?? "/", `http://${host}`);
    const isPage = url.pathname === "/" || url.pathname === "/index.html";
    if (!isPage && site !== undefined && site !== "same-origin" && site !== "none")
      return plain(response, 403, "Requests from other pages are refused.");
    const call = /^\/shell\/(\w+)$/.exec(url.pathname);
    if (call !== null && request.method === "POST") return shellCall(request, response, call[1] as string);
    if (isPage && !same(url.searchParams.get("t") ?? undefined, token))
      return plain(response, 403, "Open the whole address that was printed at the start; it ends in a token.");
    return sendResponse(await serve(standardRequest(request, `http://${host}`)), response);
  }

  const server: Server = createServer((request, response) => {
    answer(request, response).catch((error: unknown) => {
      if (response.headersSent) response.destroy();
      else plain(response, 500, wordsOf(error));
    });
  });
  await new Promise<void>((resolve, reject) => {
    server.once("error", reject);
    server.listen(port, "127.0.0.1", resolve);
  });
  const actual = (server.address() as AddressInfo).port;
  host = `127.0.0.1:${actual}`;
  return {
    url: `http://${host}/?t=${token}`,
    port: actual,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}
