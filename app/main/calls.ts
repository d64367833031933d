import type { IpcMain, IpcMainInvokeEvent } from "electron";
import { SHELL_CALLS, type Shell } from "../shell/contract.ts";
import { answerShellCall } from "../shell/shell.ts";
import { isOwnPage } from "./protection.ts";

/** Answer the contract's calls, from our own top frame only. */
export function answerCalls(ipc: Pick<IpcMain, "handle">, shell: Shell): void {
  for (const call of SHELL_CALLS) {
    ipc.handle(`shell:${call}`, (event: IpcMainInvokeEvent, ...args: unknown[]) => {
      const frame = event.senderFrame;
      if (frame === null || frame.parent !== null || !isOwnPage(frame.url))
        throw new Error("Calls are answered for the app's own window alone.");
      return answerShellCall(shell, call, args);
    });
  }
}
