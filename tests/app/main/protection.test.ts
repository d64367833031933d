import type { IpcMainInvokeEvent } from "electron";
import { expect, test } from "vitest";
import { answerCalls } from "../../../app/main/calls.ts";
import { confine, denyPermissions, isOwnPage } from "../../../app/main/protection.ts";
import { SHELL_CALLS, type Shell } from "../../../app/shell/contract.ts";

// Electron's runtime is not at hand in tests: these drive our side of its seams with stand-ins typed by electron.d.ts.

type Listener = (event: { url?: string; preventDefault(): void }) => void;

function confined() {
  const listeners = new Map<string, Listener>();
  let opener: (() => { action: string }) | undefined;
  confine({
    on: (name: string, listener: Listener) => listeners.set(name, listener),
    setWindowOpenHandler: (handler: () => { action: string }) => {
      opener = handler;
    },
  } as never);
  const denied = (name: string, url = ""): boolean => {
    let stopped = false;
    listeners.get(name)?.({
      url,
      preventDefault: () => {
        stopped = true;
      },
    });
    return stopped;
  };
  return { denied, opener };
}

test("only the app's own pages are its own", () => {
  expect(isOwnPage("isohypse://app/index.html")).toBe(true);
  for (const url of [
    "isohypse://other/",
    "https://app/",
    "isohypse:app",
    "file:///etc/passwd",
    "about:blank",
    "",
    "nonsense",
  ])
    expect(isOwnPage(url), url).toBe(false);
});

test("navigation away, redirects, new windows and embedded views are denied", () => {
  const { denied, opener } = confined();
  expect(denied("will-navigate", "https://example.org/")).toBe(true);
  expect(denied("will-navigate", "isohypse://app/index.html")).toBe(false);
  expect(denied("will-redirect")).toBe(true);
  expect(denied("will-attach-webview")).toBe(true);
  expect(opener?.()).toEqual({ action: "deny" });
});

test("permissions are denied, but for copying from our own page", () => {
  let ask: ((c: unknown, p: string, a: (ok: boolean) => void, d: { requestingUrl: string }) => void) | undefined;
  let check: ((c: unknown, p: string, o: string) => boolean) | undefined;
  denyPermissions({
    setPermissionRequestHandler: (handler: typeof ask) => {
      ask = handler;
    },
    setPermissionCheckHandler: (handler: typeof check) => {
      check = handler;
    },
  } as never);
  const asked = (permission: string, url: string): boolean => {
    let answer = true;
    ask?.(
      null,
      permission,
      (ok) => {
        answer = ok;
      },
      { requestingUrl: url },
    );
    return answer;
  };
  for (const permission of ["geolocation", "media", "notifications", "clipboard-read", "openExternal", "fullscreen"])
    expect(asked(permission, "isohypse://app/index.html"), permission).toBe(false);
  expect(asked("clipboard-sanitized-write", "isohypse://app/index.html")).toBe(true);
  expect(asked("clipboard-sanitized-write", "https://example.org/")).toBe(false);
  expect(check?.(null, "media", "isohypse://app/")).toBe(false);
});

test("calls are answered for the top frame of our own page alone", async () => {
  const handlers = new Map<string, (event: IpcMainInvokeEvent, ...args: unknown[]) => unknown>();
  const shell = { launch: async () => "launched", autosave: async () => undefined } as unknown as Shell;
  answerCalls({ handle: (name: string, handler: never) => handlers.set(name, handler) } as never, shell);
  expect([...handlers.keys()]).toEqual(SHELL_CALLS.map((call) => `shell:${call}`));
  const from = (senderFrame: unknown, ...args: unknown[]) =>
    (async () => handlers.get("shell:launch")?.({ senderFrame } as IpcMainInvokeEvent, ...args))();
  expect(await from({ url: "isohypse://app/index.html", parent: null })).toBe("launched");
  const refused = "own window alone";
  await expect(from(null)).rejects.toThrow(refused);
  await expect(from({ url: "https://example.org/", parent: null })).rejects.toThrow(refused);
  await expect(from({ url: "isohypse://app/index.html", parent: {} })).rejects.toThrow(refused);
  await expect(from({ url: "isohypse://app/index.html", parent: null }, "extra")).rejects.toThrow("no arguments");
});
