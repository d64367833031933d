import type { ShareBarsProps } from "../chart/types.ts";
import { THEMES, waveColour } from "../theme/tokens.ts";

const ROW = 17;
const BAR = 11;
const NAME = 52;
const NUMBER = 50;

/** `+301`, `−11`, `+0.4`. */
export function signedText(value: number, digits: number): string {
  if (!Number.isFinite(value)) return "missing";
  const text = Math.abs(value).toFixed(digits);
  return Number(text) === 0 ? text : `${value < 0 ? "−" : "+"}${text}`;
}

/** Bars laid end to end: what each wave adds to the value at the cursor, down to their sum. */
export function ShareBars({ shares, total, units, theme, width }: ShareBarsProps) {
  const tokens = THEMES[theme];
  const ends: number[] = [0];
  for (const { value } of shares) ends.push((ends.at(-1) as number) + (Number.isFinite(value) ? value : 0));
  const low = Math.min(...ends, 0);
  const high = Math.max(...ends, 0);
  const room = width - NAME - NUMBER;
  const scale = high > low ? room / (high - low) : 0;
  const x = (value: number): number => NAME + (value - low) * scale;
  const digits = Math.max(Math.abs(low), Math.abs(high)) < 20 ? 1 : 0;
  const height = ROW * (shares.length + 1) + 6;
  const words = shares.map(({ label, value }) => `${label} ${signedText(value, digits)}`).join(", ");
  return (
    <svg
      width={width}
      height={height}
      role="img"
      aria-label={`${words}; sum ${signedText(total, digits)} ${units}`}
      className="share-bars"
      data-testid="share-bars"
      data-total={total}
    >
      <line x1={x(0)} x2={x(0)} y1={0} y2={height} stroke={tokens.rule2} strokeWidth={0.8} />
      {shares.map(({ label, k, value }, i) => {
        const from = ends[i] as number;
        const to = ends[i + 1] as number;
        const top = i * ROW;
        return (
          <g key={label}>
            <rect x={0} y={top + 2} width={4} height={BAR} fill={waveColour(k, theme)} />
            <text x={12} y={top + 12} fill={tokens.ink} fontSize={13}>
              {label}
            </text>
            <rect
              x={x(Math.min(from, to))}
              y={top + 2}
              width={Math.max(1, Math.abs(to - from) * scale)}
              height={BAR}
              fill={waveColour(k, theme)}
            />
            <line
              x1={x(to)}
              x2={x(to)}
              y1={top + 2}
              y2={top + ROW + 2 + (i === shares.length - 1 ? 4 : 0)}
              stroke={tokens.rule2}
              strokeWidth={0.8}
            />
            <text
              x={width}
              y={top + 12}
              textAnchor="end"
              fill={tokens.ink}
              fontSize={13}
              fontWeight={Math.abs(value) > 0.4 * Math.abs(total) ? 640 : 400}
            >
              {signedText(value, digits)}
            </text>
          </g>
        );
      })}
      <line
        x1={0}
        x2={width}
        y1={ROW * shares.length + 2}
        y2={ROW * shares.length + 2}
        stroke={tokens.rule2}
        strokeWidth={0.8}
      />
      <text x={0} y={height - 4} fill={tokens.ink} fontSize={13} fontWeight={640}>
        sum
      </text>
      <rect
        x={x(Math.min(0, total))}
        y={height - BAR - 5}
        width={Math.max(1, Math.abs(total) * scale)}
        height={BAR}
        fill={total < 0 ? (tokens.below[6] as string) : (tokens.above[6] as string)}
      />
      <text x={width} y={height - 4} textAnchor="end" fill={tokens.ink} fontSize={13} fontWeight={640}>
        {signedText(total, digits)}
      </text>
    </svg>
  );
}
