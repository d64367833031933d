import { join } from "node:path";
import { app, BrowserWindow, dialog, ipcMain, protocol, session } from "electron";
import { CaseStore } from "../shell/case-store.ts";
import { FileRegistry } from "../shell/file-registry.ts";
import { KnownPlaces } from "../shell/known-places.ts";
import { createShell } from "../shell/shell.ts";
import { windowServer } from "../shell/window-server.ts";
import { answerCalls } from "./calls.ts";
import { confineAll, denyPermissions, ORIGIN, SCHEME } from "./protection.ts";

// Built to out/main/index.js, two folders below the project.
const root = join(import.meta.dirname, "../..");

protocol.registerSchemesAsPrivileged([
  {
    scheme: SCHEME,
    privileges: { standard: true, secure: true, supportFetchAPI: true, stream: true, codeCache: true },
  },
]);
app.enableSandbox();

/** The one window; a second start shows it. */
function openWindow(): BrowserWindow {
  const window = new BrowserWindow({
    width: 1440,
    height: 900,
    minWidth: 1100,
    minHeight: 700,
    title: "Isohypse",
    webPreferences: {
      preload: join(root, "out/preload/index.cjs"),
      sandbox: true,
      contextIsolation: true,
      nodeIntegration: false,
      webSecurity: true,
    },
  });
  void window.loadURL(`${ORIGIN}/index.html`);
  return window;
}

function filesNamed(argv: readonly string[]): string[] {
  const start = argv.indexOf("--");
  return start < 0 ? [] : argv.slice(start + 1);
}

async function start(): Promise<void> {
  await app.whenReady();
  const registry = new FileRegistry("/files/");
  let window: BrowserWindow | null = null;
  const shell = createShell({
    kind: "electron",
    version: app.getVersion(),
    named: filesNamed(process.argv),
    sampleFolder: join(root, "sample-data"),
    registry,
    store: new CaseStore(app.getPath("userData")),
    places: new KnownPlaces(app.getPath("userData")),
    async dialog() {
      const options = { properties: ["openFile", "multiSelections"] as ("openFile" | "multiSelections")[] };
      const answer =
        window === null ? await dialog.showOpenDialog(options) : await dialog.showOpenDialog(window, options);
      return answer.canceled ? [] : answer.filePaths;
    },
  });
  protocol.handle(SCHEME, windowServer(join(root, "out/renderer"), registry));
  denyPermissions(session.defaultSession);
  answerCalls(ipcMain, shell);
  window = openWindow();
  app.on("second-instance", () => {
    if (window === null) return;
    if (window.isMinimized()) window.restore();
    window.focus();
  });
  app.on("activate", () => {
    if (BrowserWindow.getAllWindows().length === 0) window = openWindow();
  });
}

confineAll(app);
app.on("window-all-closed", () => {
  if (process.platform !== "darwin") app.quit();
});
if (app.requestSingleInstanceLock()) {
  start().catch((error: unknown) => {
    dialog.showErrorBox("Isohypse could not start", error instanceof Error ? error.message : String(error));
    app.quit();
  });
} else app.quit();
