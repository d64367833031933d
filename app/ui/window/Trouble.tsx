interface TroubleProps {
  readonly title: string;
  readonly words: string;
  readonly testId?: string;
  onRetry(): void;
}

/** Where a figure would be: why it is not there, and the way to try again. */
export function Trouble({ title, words, testId, onRetry }: TroubleProps) {
  return (
    <section className="notice trouble" data-kind="error" data-testid={testId}>
      <b>{title}</b> {words}
      <p>
        <button type="button" onClick={onRetry}>
          Try again
        </button>
      </p>
    </section>
  );
}
