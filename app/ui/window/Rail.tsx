import { type ThemeName, waveColour } from "../theme/tokens.ts";
import type { Picture } from "./use-picture.ts";

interface RailProps {
  readonly picture: Picture;
  readonly theme: ThemeName;
  readonly isWaiting: boolean;
}

/** The questions, each with its live answer. */
export function Rail({ picture, theme, isWaiting }: RailProps) {
  const { headline, readings } = picture;
  const most = Math.max(1e-9, ...readings.map(({ amplitude }) => amplitude || 0));
  return (
    <nav className="rail" aria-label="Questions">
      <button type="button" className="question" aria-current="page">
        <span className="question-name">
          <span className="swiped">Pattern</span>
          <span className="number">1</span>
        </span>
        <span className="question-words">
          {headline?.main ?? (isWaiting ? "Computing …" : "Which waves shape the flow")}
        </span>
        {readings.some(({ amplitude }) => amplitude > 0) && (
          <svg width="184" height="34" aria-hidden="true">
            {readings.map(({ k, amplitude }, i) => {
              const height = Math.max(1, (30 * (amplitude || 0)) / most);
              return <rect key={k} x={i * 23} y={32 - height} width={20} height={height} fill={waveColour(k, theme)} />;
            })}
          </svg>
        )}
      </button>
    </nav>
  );
}
