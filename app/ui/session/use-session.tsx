import { createContext, useContext, useSyncExternalStore } from "react";
import type { Session } from "./session.ts";
import type { SessionState } from "./session-state.ts";

export const SessionContext = createContext<Session | null>(null);

/** The window's session. */
export function useSession(): Session {
  const session = useContext(SessionContext);
  if (session === null) throw new Error("No session above this component.");
  return session;
}

export function useSessionState(): SessionState {
  const session = useSession();
  return useSyncExternalStore(session.subscribe, session.state);
}
