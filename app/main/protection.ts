import type { App, Session, WebContents } from "electron";

/** Scheme of the window's own pages and files. */
export const SCHEME = "isohypse";
export const ORIGIN = `${SCHEME}://app`;

/** True for pages that the shell itself serves. */
export function isOwnPage(url: string): boolean {
  try {
    const { protocol, host } = new URL(url);
    return protocol === `${SCHEME}:` && host === "app";
  } catch {
    return false;
  }
}

/** Deny what no page of ours ever asks for: other pages, new windows, embedded views. */
export function confine(contents: Pick<WebContents, "on" | "setWindowOpenHandler">): void {
  contents.on("will-navigate", (event) => {
    if (!isOwnPage(event.url)) event.preventDefault();
  });
  contents.on("will-redirect", (event) => event.preventDefault());
  contents.on("will-attach-webview", (event) => event.preventDefault());
  contents.setWindowOpenHandler(() => ({ action: "deny" }));
}

/** Deny every permission except writing to the clipboard ("copy as CSV"), asked for by our own page. */
export function denyPermissions(
  session: Pick<Session, "setPermissionRequestHandler" | "setPermissionCheckHandler">,
): void {
  const allowed = (permission: string, url: string): boolean =>
    permission === "clipboard-sanitized-write" && isOwnPage(url);
  session.setPermissionRequestHandler((_contents, permission, answer, details) =>
    answer(allowed(permission, details.requestingUrl)),
  );
  session.setPermissionCheckHandler((_contents, permission, origin) => allowed(permission, origin));
}

export function confineAll(app: Pick<App, "on">): void {
  app.on("web-contents-created", (_event, contents) => confine(contents));
}
