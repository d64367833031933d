import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import { FileRegistry } from "../../../app/shell/file-registry.ts";
import { requestedRange, windowServer } from "../../../app/shell/window-server.ts";

let folder: string;
let registry: FileRegistry;
let serve: (request: Request) => Promise<Response>;
const ORIGIN = "http://127.0.0.1:1";
const get = (path: string, headers: Record<string, string> = {}) => serve(new Request(`${ORIGIN}${path}`, { headers }));

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "isohypse-serve-"));
  await writeFile(join(folder, "index.html"), "<!doctype html><title>x</title>");
  await writeFile(join(folder, "secret.txt"), "not served: no page has this ending");
  await writeFile(
    join(folder, "data.nc"),
    Uint8Array.from({ length: 1000 }, (_, i) => i % 251),
  );
  registry = new FileRegistry("/files/");
  serve = windowServer(folder, registry);
});
afterAll(() => rm(folder, { recursive: true }));

test("the page comes with its security headers", async () => {
  const page = await get("/");
  expect(page.status).toBe(200);
  const policy = page.headers.get("content-security-policy") ?? "";
  expect(policy).toContain("default-src 'none'");
  expect(/script-src[^;]*'unsafe-(inline|eval)'/.test(policy)).toBe(false);
  expect(page.headers.get("cross-origin-embedder-policy")).toBe("require-corp");
  expect(page.headers.get("x-content-type-options")).toBe("nosniff");
});

test("ranges of an admitted file are its bytes", async () => {
  const file = await registry.admit(join(folder, "data.nc"));
  expect(file).toMatchObject({ name: "data.nc", size: 1000 });
  const answer = await get(file?.url ?? "", { range: "bytes=250-259" });
  expect(answer.status).toBe(206);
  expect(answer.headers.get("content-range")).toBe("bytes 250-259/1000");
  expect([...new Uint8Array(await answer.arrayBuffer())]).toEqual([250, 0, 1, 2, 3, 4, 5, 6, 7, 8]);
  const tail = await get(file?.url ?? "", { range: "bytes=990-" });
  expect((await tail.arrayBuffer()).byteLength).toBe(10);
});

test("a file has one address, that cannot be told from its name", async () => {
  const first = await registry.admit(join(folder, "data.nc"));
  const second = await registry.admit(join(folder, ".", "data.nc"));
  expect(second?.url).toBe(first?.url);
  expect(first?.url).toMatch(/^\/files\/[\w-]{32}\//);
});

test.each([
  ["an unknown id", "/files/AAAAAAAAAAAAAAAA/data.nc", { range: "bytes=0-1" }, 404],
  ["a path out of the folder", "/..%2f..%2fetc/passwd.html", {}, 404],
  ["an encoded way out", "/%2e%2e/%2e%2e/etc/hosts.html", {}, 404],
  ["a file of no page's kind", "/secret.txt", {}, 404],
  ["a zero byte", "/index%00.html", {}, 404],
  ["broken encoding", "/%zz", {}, 400],
])("%s is refused", async (_words, path, headers, status) => {
  expect((await get(path, headers as Record<string, string>)).status).toBe(status);
});

test("a file without a range, beyond its end, or gone is refused in words", async () => {
  const file = await registry.admit(join(folder, "data.nc"));
  expect((await get(file?.url ?? "")).status).toBe(416);
  const beyond = await get(file?.url ?? "", { range: "bytes=1000-1001" });
  expect(beyond.status).toBe(416);
  expect(beyond.headers.get("content-range")).toBe("bytes */1000");
  await writeFile(join(folder, "gone.nc"), "x");
  const gone = await registry.admit(join(folder, "gone.nc"));
  await rm(join(folder, "gone.nc"));
  const answer = await get(gone?.url ?? "", { range: "bytes=0-0" });
  expect(answer.status).toBe(410);
  expect(await answer.text()).toContain("no longer where it was");
});

test("only GET is answered", async () => {
  expect((await serve(new Request(`${ORIGIN}/`, { method: "POST", body: "x" }))).status).toBe(405);
});

test("a folder or a missing path is not admitted", async () => {
  expect(await registry.admit(folder)).toBeNull();
  expect(await registry.admit(join(folder, "nothing.nc"))).toBeNull();
});

test("ranges are read as RFC 9110 §14 writes them", () => {
  expect(requestedRange("bytes=0-0", 5)).toEqual([0, 1]);
  expect(requestedRange("bytes=2-", 5)).toEqual([2, 5]);
  expect(requestedRange("bytes=2-99", 5)).toEqual([2, 5]);
  for (const bad of [null, "", "bytes=-3", "bytes=3-2", "items=0-1", "bytes=0-1,3-4", "bytes=5-"])
    expect(requestedRange(bad, 5), String(bad)).toBeNull();
});
