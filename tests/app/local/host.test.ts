import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { request as httpRequest } from "node:http";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import { browserCommand, programOnPath } from "../../../app/local/browser.ts";
import { type LocalHost, startLocalHost } from "../../../app/local/host.ts";
import { CaseStore } from "../../../app/shell/case-store.ts";
import { FileRegistry } from "../../../app/shell/file-registry.ts";
import { KnownPlaces } from "../../../app/shell/known-places.ts";
import { createShell } from "../../../app/shell/shell.ts";

let folder: string;
let host: LocalHost;
let token: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "isohypse-host-"));
  await writeFile(join(folder, "index.html"), '<!doctype html><meta name="isohypse-token" content="">');
  await writeFile(join(folder, "app.js"), "1");
  await writeFile(join(folder, "mine.nc"), "CDF0123456789");
  const registry = new FileRegistry("/files/");
  const shell = createShell({
    kind: "local",
    version: "1.2.3",
    named: [join(folder, "mine.nc")],
    sampleFolder: folder,
    registry,
    store: new CaseStore(join(folder, "state")),
    places: new KnownPlaces(join(folder, "state")),
    dialog: null,
  });
  host = await startLocalHost(folder, registry, shell);
  token = new URL(host.url).searchParams.get("t") ?? "";
});
afterAll(async () => {
  await host.close();
  await rm(folder, { recursive: true });
});

/** A raw request, for headers that fetch would not let us set. */
function raw(
  path: string,
  headers: Record<string, string>,
  method = "GET",
  body = "",
): Promise<{ status: number; text: string }> {
  return new Promise((resolve, reject) => {
    const request = httpRequest({ host: "127.0.0.1", port: host.port, path, method, headers }, (response) => {
      let text = "";
      response.on("data", (part) => {
        text += part;
      });
      response.on("end", () => resolve({ status: response.statusCode ?? 0, text }));
    });
    request.on("error", reject);
    request.end(body);
  });
}

const call = (name: string, args: unknown[], headers: Record<string, string> = {}) =>
  raw(
    `/shell/${name}`,
    { host: `127.0.0.1:${host.port}`, "x-isohypse-token": token, ...headers },
    "POST",
    JSON.stringify(args),
  );

test("the address carries a token of 192 random bits, and the page gets it", async () => {
  expect(token).toMatch(/^[\w-]{32}$/);
  const page = await fetch(host.url);
  expect(await page.text()).toContain(`content="${token}"`);
});

test("the page without its token is refused, and does not give the token away", async () => {
  for (const path of ["/", "/index.html", "/?t=wrong"]) {
    const answer = await raw(path, { host: `127.0.0.1:${host.port}` });
    expect(answer.status, path).toBe(403);
    expect(answer.text).not.toContain(token);
  }
});

test("calls answer with the token, and files can then be read by ranges", async () => {
  const launch = JSON.parse((await call("launch", [])).text);
  expect(launch).toMatchObject({ version: "1.2.3", shell: "local", sample: false });
  const answer = await fetch(`http://127.0.0.1:${host.port}${launch.files[0].url}`, {
    headers: { range: "bytes=3-5" },
  });
  expect(await answer.text()).toBe("012");
  expect((await call("autosave", ["{}"])).status).toBe(200);
  expect(JSON.parse((await call("launch", [])).text).autosave).toBe("{}");
});

test.each([
  ["a call with a wrong token", () => call("launch", [], { "x-isohypse-token": "no" }), 403],
  ["a call from another origin", () => call("launch", [], { origin: "http://example.org" }), 403],
  ["a call that names another host", () => call("launch", [], { host: "example.org" }), 421],
  [
    "a request from another site's page",
    () => raw("/app.js", { host: `127.0.0.1:${host.port}`, "sec-fetch-site": "cross-site" }),
    403,
  ],
  ["an unknown call", () => call("remove", []), 400],
  [
    "arguments that are no list",
    () => raw("/shell/launch", { host: `127.0.0.1:${host.port}`, "x-isohypse-token": token }, "POST", "{}"),
    400,
  ],
  [
    "a body over 20 MB",
    () =>
      raw(
        "/shell/autosave",
        { host: `127.0.0.1:${host.port}`, "x-isohypse-token": token },
        "POST",
        "x".repeat(21 * 2 ** 20),
      ),
    400,
  ],
])("%s is refused", async (_words, ask, status) => {
  expect((await ask()).status).toBe(status);
});

test("it listens on the loopback address alone", () => {
  expect(new URL(host.url).hostname).toBe("127.0.0.1");
});

test("the browser is the one asked for, else the system's, else none where nobody could see it", () => {
  expect(browserCommand("u", "my-browser", "linux", {})).toEqual(["my-browser", "u"]);
  expect(browserCommand("u", null, "darwin", {})).toEqual(["open", "u"]);
  expect(browserCommand("u", null, "win32", {})?.at(-1)).toBe("u");
  expect(browserCommand("u", null, "linux", { PATH: process.env.PATH })).toBeNull();
  expect(programOnPath(["no-such-program"], process.env.PATH ?? "")).toBeNull();
  expect(programOnPath(["no-such-program", "sh"], process.env.PATH ?? "")).toMatch(/sh$/);
});
