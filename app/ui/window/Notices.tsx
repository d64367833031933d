import { useSession, useSessionState } from "../session/use-session.tsx";

interface NoticesProps {
  onOpen(): void;
}

/** Errors and notes, and files that a restored case waits for; they stay until they are dealt with. */
export function Notices({ onOpen }: NoticesProps) {
  const session = useSession();
  const { notices, awaited } = useSessionState();
  if (notices.length === 0 && awaited.length === 0) return null;
  return (
    <div className="notices" aria-live="assertive">
      {awaited.map(({ name, size }) => (
        <section key={name} className="notice" data-kind="note" data-testid="awaited">
          <b>Choose {name} again.</b> The case is as you left it; this file (
          {size.toLocaleString("en").replaceAll(",", "\u202f")} bytes) came without a place to find it by.
          <p>
            <button type="button" onClick={onOpen}>
              Choose file
            </button>
            <button type="button" onClick={() => void session.closeFile(name)}>
              Leave it out
            </button>
          </p>
        </section>
      ))}
      {notices.map((notice) => (
        <section key={notice.id} className="notice" data-kind={notice.kind} data-testid={`notice-${notice.kind}`}>
          <b>{notice.title}</b> {notice.words}
          <p>
            <button type="button" onClick={() => session.dismiss(notice.id)}>
              Dismiss
            </button>
            {notice.kind === "error" && (
              <button type="button" onClick={onOpen}>
                Choose another file
              </button>
            )}
          </p>
        </section>
      ))}
    </div>
  );
}
