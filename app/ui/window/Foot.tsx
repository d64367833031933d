import { useEffect, useState } from "react";
import type { TaskProgress } from "../../worker/desk.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";

const SHOW_AFTER = 500;

function timeLeft(seconds: number | null): string {
  if (seconds === null) return "";
  if (seconds < 1.5) return ", about 1 s left";
  return seconds < 90 ? `, about ${Math.round(seconds)} s left` : `, about ${Math.round(seconds / 60)} min left`;
}

/** The longest-running task, once it has run for half a second. */
function useShownTask(tasks: readonly TaskProgress[]): TaskProgress | null {
  const [first] = tasks;
  const [shown, setShown] = useState<number | null>(null);
  const id = first?.task ?? null;
  useEffect(() => {
    if (id === null) return;
    const timer = setTimeout(() => setShown(id), SHOW_AFTER);
    return () => clearTimeout(timer);
  }, [id]);
  return first !== undefined && shown === first.task ? first : null;
}

export function Foot() {
  const session = useSession();
  const { tasks, savedAt, opening } = useSessionState();
  const task = useShownTask(tasks);
  return (
    <footer className="foot">
      <svg
        width="16"
        height="14"
        viewBox="0 0 16 14"
        fill="none"
        stroke="currentColor"
        strokeWidth="1.3"
        aria-hidden="true"
      >
        <path d="M8 1 15 13H1Z" strokeLinejoin="round" />
        <path d="M8 5v4M8 10.500v1" />
      </svg>
      <span data-testid="caution">
        Guidance, not a warning. Warnings and their wording are the responsible national service’s and a licensed
        forecaster’s.
      </span>
      <span className="spring" />
      {opening.length > 0 && <span>Opening {opening.join(", ")} …</span>}
      {task !== null && (
        <span className="task" data-testid="task">
          {task.title}
          <i className="bar">
            <i style={{ width: `${Math.round(100 * task.done)}%` }} />
          </i>
          {Math.round(100 * task.done)} %{timeLeft(task.secondsLeft)}
          <button type="button" className="plain" onClick={() => void session.cancel(task.task)}>
            Cancel
          </button>
        </span>
      )}
      {savedAt !== null && (
        <span className="saved" data-testid="saved">
          Case saved {savedAt.toISOString().slice(11, 16)} UTC
        </span>
      )}
    </footer>
  );
}
