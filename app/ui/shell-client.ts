import type { Shell } from "../shell/contract.ts";

/** Electron's preload puts the shell on the window; the local host is spoken to by POST. */
declare global {
  interface Window {
    readonly isohypse?: Shell;
  }
}

function pageToken(): string {
  return document.querySelector<HTMLMetaElement>('meta[name="isohypse-token"]')?.content ?? "";
}

/** One call to the local host. @throws Error with the host's words. */
async function hostCall<T>(call: string, args: readonly unknown[]): Promise<T> {
  let answer: Response;
  try {
    answer = await fetch(`shell/${call}`, {
      method: "POST",
      headers: { "content-type": "application/json", "x-isohypse-token": pageToken() },
      body: JSON.stringify(args),
    });
  } catch {
    throw new Error("The program that serves this window has stopped. Start Isohypse again.");
  }
  if (!answer.ok) throw new Error((await answer.text()).trim() || `The shell answered ${answer.status}.`);
  return (await answer.json()) as T;
}

const localHost: Shell = {
  launch: () => hostCall("launch", []),
  sampleFiles: () => hostCall("sampleFiles", []),
  chooseFiles: () => hostCall("chooseFiles", []),
  filesAt: (places) => hostCall("filesAt", [places]),
  autosave: (text) => hostCall("autosave", [text]),
};

/** The shell that holds this window. */
export function windowShell(): Shell {
  return window.isohypse ?? localHost;
}
