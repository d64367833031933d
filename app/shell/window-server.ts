import { readFile, stat } from "node:fs/promises";
import { extname, join, normalize, sep } from "node:path";
import { type FileRegistry, fileRange } from "./file-registry.ts";
import { PAGE_HEADERS } from "./security.ts";

const TYPES: Readonly<Record<string, string>> = {
  ".html": "text/html; charset=utf-8",
  ".js": "text/javascript; charset=utf-8",
  ".css": "text/css; charset=utf-8",
  ".json": "application/json; charset=utf-8",
  ".svg": "image/svg+xml",
  ".png": "image/png",
  ".woff2": "font/woff2",
  ".wasm": "application/wasm",
};
/** Most bytes that one answer carries, so that a bad request cannot fill the memory. */
const MOST_BYTES = 64 * 1024 * 1024;

function refusal(status: number, words: string, extra: Record<string, string> = {}): Response {
  return new Response(`${words}\n`, {
    status,
    headers: { ...PAGE_HEADERS, "content-type": "text/plain; charset=utf-8", ...extra },
  });
}

/** Half-open range of a `bytes=from-to` header within `size`; null if it is absent or not of that form. */
export function requestedRange(header: string | null, size: number): readonly [number, number] | null {
  const match = /^bytes=(\d{1,15})-(\d{0,15})$/.exec(header ?? "");
  if (match === null) return null;
  const from = Number(match[1]);
  const to = match[2] === "" ? size : Math.min(size, Number(match[2]) + 1);
  return from < to ? [from, to] : null;
}

async function fileAnswer(request: Request, registry: FileRegistry, id: string): Promise<Response> {
  const path = registry.pathOf(id);
  if (path === undefined) return refusal(404, "No such file is open.");
  const info = await stat(path).catch(() => null);
  if (info === null) return refusal(410, "The file is no longer where it was.");
  const range = requestedRange(request.headers.get("range"), info.size);
  if (range === null)
    return refusal(416, "Ask for a range of bytes within the file.", { "content-range": `bytes */${info.size}` });
  const [from, to] = range;
  if (to - from > MOST_BYTES) return refusal(413, `Ask for at most ${MOST_BYTES} bytes at a time.`);
  const bytes = await fileRange(path, from, to);
  return new Response(bytes, {
    status: 206,
    headers: {
      ...PAGE_HEADERS,
      "content-type": "application/octet-stream",
      "content-range": `bytes ${from}-${from + bytes.length - 1}/${info.size}`,
    },
  });
}

/**
 * What answers a window's requests, for Electron's own scheme and for the local host alike: the built window below
 * `folder`, and byte ranges of admitted files below `/files/`.
 *
 * @param page Last word on the page itself (the local host puts its token there).
 */
export function windowServer(
  folder: string,
  registry: FileRegistry,
  page: (html: string) => string = (html) => html,
): (request: Request) => Promise<Response> {
  return async (request) => {
    if (request.method !== "GET") return refusal(405, "Only GET is answered here.", { allow: "GET" });
    let path: string;
    try {
      path = decodeURIComponent(new URL(request.url).pathname);
    } catch {
      return refusal(400, "The address cannot be read.");
    }
    const file = /^\/files\/([\w-]+)(\/|$)/.exec(path);
    if (file !== null) return fileAnswer(request, registry, file[1] as string);
    const wanted = normalize(join(folder, path === "/" ? "index.html" : path));
    if (path.includes("\0") || !wanted.startsWith(folder + sep)) return refusal(404, "There is no such page.");
    const type = TYPES[extname(wanted)];
    const bytes = type === undefined ? null : await readFile(wanted).catch(() => null);
    if (bytes === null || type === undefined) return refusal(404, "There is no such page.");
    const body = extname(wanted) === ".html" ? page(bytes.toString("utf8")) : new Uint8Array(bytes);
    return new Response(body, { headers: { ...PAGE_HEADERS, "content-type": type } });
  };
}
