import { contextBridge, ipcRenderer } from "electron";
import { SHELL_CALLS, type Shell } from "../shell/contract.ts";

const call =
  (name: string) =>
  (...args: unknown[]) =>
    ipcRenderer.invoke(`shell:${name}`, ...args);

/** The contract's functions and nothing else of Electron. */
const shell = Object.fromEntries(SHELL_CALLS.map((name) => [name, call(name)])) as unknown as Shell;
contextBridge.exposeInMainWorld("isohypse", shell);
