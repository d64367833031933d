import type { DialWave } from "../chart/types.ts";
import { longitudeText } from "../text/place-text.ts";
import { FONT, THEMES, type ThemeName, waveColour } from "../theme/tokens.ts";
import { type DialPoint, type DialScale, dialPoint, handEnd, nearestRidge, trailPoints } from "./dial-geometry.ts";

/** The oldest piece of a trail still shows. */
const LEAST_OPACITY = 0.15;

interface DialProps {
  readonly wave: DialWave;
  readonly scale: DialScale;
  readonly cursorLon: number;
  readonly theme: ThemeName;
  readonly isChosen: boolean;
  /** Says which way is which; one dial of a row does. */
  readonly isNamed: boolean;
}

function line([x1, y1]: DialPoint, [x2, y2]: DialPoint): { x1: number; y1: number; x2: number; y2: number } {
  return { x1, y1, x2, y2 };
}

/** One wave: the hand points at the ridge nearest the cursor, the thin ones at its other ridges. */
export function Dial({ wave, scale, cursorLon, theme, isChosen, isNamed }: DialProps) {
  const tokens = THEMES[theme];
  const colour = waveColour(wave.k, theme);
  const { middle, radius, turn } = scale;
  const nearest = nearestRidge(wave.ridge, wave.k, cursorLon);
  const ridges = Array.from({ length: wave.k }, (_, i) => nearest + (360 * i) / wave.k);
  const hasValue = Number.isFinite(wave.amplitude) && Number.isFinite(wave.ridge);
  const trail = hasValue ? trailPoints(scale, wave, cursorLon) : [];
  const hand = handEnd(scale, wave.amplitude, nearest);
  const { background } = wave;
  const rest =
    background === null || !Number.isFinite(background.amplitude)
      ? null
      : handEnd(scale, background.amplitude, nearestRidge(background.ridge, wave.k, cursorLon));
  const centre: DialPoint = [middle, middle];
  const tickFoot = dialPoint(scale, cursorLon, 1 - 7 / radius);
  const tickEnd = dialPoint(scale, cursorLon, 1);
  const name = (lon: number, share: number) => {
    const [x, y] = dialPoint(scale, lon, share);
    return (
      <text x={x} y={y} className="dial-direction" fill={tokens.ink2} textAnchor="middle" dominantBaseline="central">
        {longitudeText(lon)}
      </text>
    );
  };
  return (
    <svg width={2 * middle} height={2 * middle} aria-hidden="true" fontFamily={FONT} fontSize={10.5}>
      <circle cx={middle} cy={middle} r={radius} fill={tokens.sheet} />
      {[1, 2, 3].map((ring) => (
        <circle
          key={ring}
          cx={middle}
          cy={middle}
          r={(radius * ring) / 4}
          fill="none"
          stroke={tokens.rule}
          strokeWidth={0.7}
        />
      ))}
      {isNamed && name(turn, 0.8)}
      {isNamed && name(turn + scale.east * 90, 0.66)}
      {Array.from({ length: 12 }, (_, i) => 30 * i).map((lon) => (
        <line
          key={lon}
          {...line(dialPoint(scale, lon, 1 - 3.5 / radius), dialPoint(scale, lon, 1))}
          stroke={tokens.rule2}
          strokeWidth={0.8}
        />
      ))}
      {hasValue && (
        <>
          {trail.slice(1).map((point, i) => (
            <line
              // biome-ignore lint/suspicious/noArrayIndexKey: a trail's places are its identity
              key={i}
              {...line(trail[i] as DialPoint, point)}
              stroke={colour}
              strokeWidth={1.6}
              strokeLinecap="round"
              opacity={Math.max(LEAST_OPACITY, 0.9 * (1 - (i + 1) / trail.length))}
            />
          ))}
          {ridges.slice(1).map((ridge) => (
            <line
              key={ridge}
              {...line(centre, handEnd(scale, wave.amplitude, ridge))}
              stroke={colour}
              strokeWidth={0.9}
              opacity={0.75}
            />
          ))}
          <line {...line(centre, hand)} stroke={colour} strokeWidth={3.2} strokeLinecap="round" />
          <circle cx={hand[0]} cy={hand[1]} r={3.4} fill={colour} />
        </>
      )}
      {rest !== null && (
        <circle cx={rest[0]} cy={rest[1]} r={2.8} fill={tokens.sheet} stroke={tokens.ink} strokeWidth={1} />
      )}
      <circle cx={middle} cy={middle} r={1.7} fill={tokens.ink} />
      <circle
        cx={middle}
        cy={middle}
        r={radius}
        fill="none"
        stroke={isChosen ? tokens.ink : tokens.rule2}
        strokeWidth={isChosen ? 2 : 1}
      />
      <line {...line(tickFoot, tickEnd)} stroke={theme === "light" ? tokens.marker : tokens.sheet} strokeWidth={5} />
      <line
        {...line(tickFoot, tickEnd)}
        stroke={theme === "light" ? tokens.ink : tokens.marker}
        strokeWidth={theme === "light" ? 1.3 : 2.4}
      />
    </svg>
  );
}
