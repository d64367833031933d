import { useCallback, useEffect, useRef, useState } from "react";
import { isKind } from "../../../core/errors.ts";
import { useSession } from "./use-session.tsx";

/** An answer of the desk: the last one that came stays until the next is there. */
export interface Answer<T> {
  readonly value: T | null;
  /** What the value was asked for; it may lag behind. */
  readonly valueKey: string | null;
  /** True while a newer answer is on its way. */
  readonly isWaiting: boolean;
  /** Why there is none, in words. */
  readonly error: string | null;
  retry(): void;
}

interface Held<T> {
  readonly value: T | null;
  readonly valueKey: string | null;
  readonly doneKey: string | null;
  readonly error: string | null;
}

interface Question<T> {
  readonly key: string;
  readonly ask: (task: number) => Promise<T>;
}

const NOTHING = { value: null, valueKey: null, doneKey: null, error: null } as const;

/**
 * Ask the desk whenever `key` changes. One question is under way at a time and only the newest waits, so that a drag
 * through time shows what it can and never queues up.
 *
 * @param key        Names the answer; null asks nothing.
 * @param ask        Gets the number of its task.
 * @param supersedes True cancels the task under way for a newer question; false lets short ones finish and be shown.
 * @param keep       Whether an old value may stay on the screen for a new key.
 */
export function useAnswer<T>(
  key: string | null,
  ask: (task: number) => Promise<T>,
  supersedes: boolean,
  keep: (oldKey: string, newKey: string) => boolean = () => true,
): Answer<T> {
  const session = useSession();
  const [held, setHeld] = useState<Held<T>>(NOTHING);
  const [attempt, setAttempt] = useState(0);
  const running = useRef<{ task: number; key: string } | null>(null);
  const next = useRef<Question<T> | null>(null);
  const wanted = useRef<string | null>(null);
  const newest = useRef(ask);
  newest.current = ask;
  const asked = key === null ? null : `${key} #${attempt}`;

  const run = useCallback(
    (question: Question<T>): void => {
      const task = session.newTask();
      running.current = { task, key: question.key };
      const settle = (change: (before: Held<T>) => Held<T>): void => {
        running.current = null;
        // What is no longer wanted at all is dropped; what is only a step behind is shown.
        if (wanted.current !== null && (wanted.current === question.key || !supersedes)) setHeld(change);
        const queued = next.current;
        next.current = null;
        if (queued !== null && queued.key === wanted.current) run(queued);
      };
      question.ask(task).then(
        (value) => settle(() => ({ value, valueKey: question.key, doneKey: question.key, error: null })),
        (error: unknown) =>
          settle((before) => ({
            ...before,
            doneKey: question.key,
            error: isKind(error, "Cancelled")
              ? wanted.current === question.key
                ? "It was cancelled."
                : null
              : error instanceof Error
                ? error.message
                : String(error),
          })),
      );
    },
    [session, supersedes],
  );

  useEffect(() => {
    wanted.current = asked;
    if (asked === null) return;
    const question = { key: asked, ask: (task: number) => newest.current(task) };
    if (running.current === null) run(question);
    else if (running.current.key !== asked) {
      next.current = question;
      if (supersedes) void session.cancel(running.current.task);
    }
    return () => {
      wanted.current = null;
    };
  }, [asked, run, session, supersedes]);

  useEffect(
    () => () => {
      next.current = null;
    },
    [],
  );

  const isUsable = held.valueKey !== null && asked !== null && keep(held.valueKey, asked);
  return {
    value: isUsable ? held.value : null,
    valueKey: isUsable ? held.valueKey : null,
    isWaiting: asked !== null && held.doneKey !== asked,
    error: held.doneKey === asked ? held.error : null,
    retry: () => setAttempt((count) => count + 1),
  };
}
