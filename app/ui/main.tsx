import "@fontsource-variable/sofia-sans/index.css";
import { Component, type ReactNode, StrictMode } from "react";
import { createRoot } from "react-dom/client";
import { startDesk } from "../worker/desk-client.ts";
import { Session } from "./session/session.ts";
import { SessionContext } from "./session/use-session.tsx";
import { windowShell } from "./shell-client.ts";
import "./window.css";
import { App } from "./window/App.tsx";

/** What is shown if the window itself fails: the case is kept, and can be gone on with. */
class Safety extends Component<{ readonly children: ReactNode }, { readonly words: string | null }> {
  override state = { words: null };
  static getDerivedStateFromError(error: unknown) {
    return { words: error instanceof Error ? error.message : String(error) };
  }
  override render() {
    if (this.state.words === null) return this.props.children;
    return (
      <section className="notice" data-kind="error">
        <b>The window could not be drawn.</b> {this.state.words} The case is kept as it was last saved.
        <p>
          <button type="button" onClick={() => location.reload()}>
            Load the window again
          </button>
        </p>
      </section>
    );
  }
}

const session = new Session(startDesk(), windowShell());
void session.start();
createRoot(document.getElementById("window") as HTMLElement).render(
  <StrictMode>
    <SessionContext value={session}>
      <Safety>
        <App />
      </Safety>
    </SessionContext>
  </StrictMode>,
);
