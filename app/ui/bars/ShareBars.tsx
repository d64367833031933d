import type { ShareBarsProps } from "../chart/types.ts";
import { signedText } from "../text/number-text.ts";
import { FONT, THEMES, waveColour } from "../theme/tokens.ts";
import { shareEnds } from "./share-ends.ts";

const ROW = 17;
const BAR = 11;
const NAME = 52;
const NUMBER = 50;
/** Numbers of this share of the sum and more are bold. */
const LARGE = 0.4;
/** Under this size numbers have a digit behind the point. */
const SMALL = 20;

/** Bars laid end to end: what each wave adds to the value at the cursor, down to their sum. */
export function ShareBars({ shares, total, units, theme, width }: ShareBarsProps) {
  const tokens = THEMES[theme];
  const { ends, low, high } = shareEnds(shares, total);
  const room = Math.max(0, width - NAME - NUMBER);
  const scale = high > low ? room / (high - low) : 0;
  const x = (value: number): number => NAME + (value - low) * scale;
  const digits = Math.max(Math.abs(low), Math.abs(high)) < SMALL ? 1 : 0;
  const text = (value: number): string => (Number.isFinite(value) ? signedText(value, digits) : "missing");
  const rule = ROW * shares.length + 2.5;
  const height = ROW * (shares.length + 1) + 6;
  const sum = { x: x(Math.min(0, total)), width: Math.max(1, Math.abs(total) * scale), y: rule + 4.5 };
  const words = shares.map(({ label, value }) => `${label} ${text(value)}`).join(", ");
  return (
    <svg
      width={width}
      height={height}
      role="img"
      aria-label={`${words}; sum ${text(total)} ${units}`}
      className="share-bars"
      data-testid="share-bars"
      data-total={total}
      fontFamily={FONT}
      fontSize={13}
      fill={tokens.ink}
      style={{ fontVariantNumeric: "tabular-nums lining-nums" }}
    >
      <line x1={x(0)} x2={x(0)} y1={0} y2={rule} stroke={tokens.rule2} strokeWidth={0.8} />
      {shares.map(({ label, k, value }, i) => {
        const [from, to] = [ends[i] as number, ends[i + 1] as number];
        const top = i * ROW + 2;
        const colour = waveColour(k, theme);
        const isLast = i === shares.length - 1;
        return (
          <g key={label}>
            <rect x={0} y={top} width={4} height={BAR} fill={colour} />
            <text x={12} y={top + 10}>
              {label}
            </text>
            <rect
              x={x(Math.min(from, to))}
              y={top}
              width={Math.max(1, Math.abs(to - from) * scale)}
              height={BAR}
              fill={colour}
            />
            <line
              x1={x(to)}
              x2={x(to)}
              y1={top}
              y2={isLast ? sum.y + BAR : top + ROW}
              stroke={tokens.rule2}
              strokeWidth={0.8}
            />
            <text
              x={width}
              y={top + 10}
              textAnchor="end"
              fontWeight={Math.abs(value) >= LARGE * Math.abs(total) && total !== 0 ? 640 : 400}
            >
              {text(value)}
            </text>
          </g>
        );
      })}
      <line x1={0} x2={width} y1={rule} y2={rule} stroke={tokens.rule2} strokeWidth={0.8} />
      <text x={0} y={sum.y + 10} fontWeight={640}>
        sum
      </text>
      {Number.isFinite(total) && (
        <rect
          x={sum.x}
          y={sum.y}
          width={sum.width}
          height={BAR}
          fill={(total < 0 ? tokens.below : tokens.above)[6] as string}
          stroke={tokens.ink}
          strokeWidth={0.8}
        />
      )}
      <text x={width} y={sum.y + 10} textAnchor="end" fontWeight={640}>
        {text(total)}
      </text>
    </svg>
  );
}
