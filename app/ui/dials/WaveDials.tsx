import type { DialHand, DialWave, WaveDialsProps } from "../chart/types.ts";
import { THEMES, waveColour } from "../theme/tokens.ts";

const FADE_FROM = 0.12;

/** `14°W`, whole degrees. */
function ridgeText(lon: number): string {
  const east = Math.round(((((lon + 180) % 360) + 360) % 360) - 180);
  if (east === 0) return "0°";
  return Math.abs(east) === 180 ? "180°" : `${Math.abs(east)}°${east < 0 ? "W" : "E"}`;
}

/** Of the ridges every 360°/k, the one nearest to a longitude. */
export function nearestRidge(ridge: number, k: number, lon: number): number {
  const cycle = 360 / k;
  return ridge + cycle * Math.round((lon - ridge) / cycle);
}

/** Ring values: 1/16, 1/4, 9/16 and all of the largest, evenly spaced on the root scale. */
export function ringValues(largest: number, linear: boolean): readonly number[] {
  return [1, 2, 3, 4].map((ring) => (linear ? ring / 4 : (ring / 4) ** 2) * largest);
}

interface DialProps extends Omit<WaveDialsProps, "waves" | "width" | "units"> {
  readonly wave: DialWave;
  readonly size: number;
}

function Dial({ wave, size, theme, turn, cursorLon, chosen, largest, linear = false }: DialProps) {
  const tokens = THEMES[theme];
  const colour = waveColour(wave.k, theme);
  const middle = size / 2;
  const radius = middle - 4;
  const at = (hand: DialHand, lon: number): readonly [number, number] => {
    const share = Math.min(1, hand.amplitude / largest);
    const r = radius * (linear ? share : Math.sqrt(share));
    const angle = ((lon - turn) * Math.PI) / 180;
    return [middle + r * Math.sin(angle), middle + r * Math.cos(angle)];
  };
  const ridges = Array.from(
    { length: wave.k },
    (_, i) => nearestRidge(wave.ridge, wave.k, cursorLon) + (360 * i) / wave.k,
  );
  let lon = nearestRidge(wave.ridge, wave.k, cursorLon);
  // Backwards from today, each ridge the nearest to the one after it, so that the trail is one path.
  const trail = [...wave.trail]
    .reverse()
    .filter(({ amplitude }) => Number.isFinite(amplitude))
    .map((hand) => {
      lon = nearestRidge(hand.ridge, wave.k, lon);
      return at(hand, lon);
    });
  const tick = ((cursorLon - turn) * Math.PI) / 180;
  const edge = (r: number): string => `${middle + r * Math.sin(tick)},${middle + r * Math.cos(tick)}`;
  const hasValue = Number.isFinite(wave.amplitude);
  return (
    <svg width={size} height={size} aria-hidden="true">
      <circle
        cx={middle}
        cy={middle}
        r={radius}
        fill={tokens.sheet}
        stroke={chosen === wave.k ? tokens.ink : tokens.rule2}
        strokeWidth={chosen === wave.k ? 2 : 1}
      />
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
      {Array.from({ length: 12 }, (_, i) => {
        const angle = (i * Math.PI) / 6;
        const [s, c] = [Math.sin(angle), Math.cos(angle)];
        return (
          <line
            key={angle}
            x1={middle + radius * s}
            y1={middle + radius * c}
            x2={middle + (radius - 4) * s}
            y2={middle + (radius - 4) * c}
            stroke={tokens.rule2}
            strokeWidth={0.7}
          />
        );
      })}
      <polyline
        points={`${edge(radius - 7)} ${edge(radius)}`}
        stroke={theme === "light" ? tokens.ink : tokens.sheet}
        strokeWidth={6}
      />
      <polyline points={`${edge(radius - 6)} ${edge(radius)}`} stroke={tokens.marker} strokeWidth={4} />
      {hasValue && (
        <>
          {trail.slice(1).map((point, i) => (
            <line
              // biome-ignore lint/suspicious/noArrayIndexKey: a trail's places are its identity
              key={i}
              x1={trail[i]?.[0]}
              y1={trail[i]?.[1]}
              x2={point[0]}
              y2={point[1]}
              stroke={colour}
              strokeWidth={1.5}
              strokeLinecap="round"
              opacity={Math.max(FADE_FROM, 1 - (i + 1) / trail.length)}
            />
          ))}
          {ridges.slice(1).map((ridge) => {
            const [x, y] = at(wave, ridge);
            return (
              <line
                key={ridge}
                x1={middle}
                y1={middle}
                x2={x}
                y2={y}
                stroke={colour}
                strokeWidth={0.9}
                opacity={0.75}
              />
            );
          })}
          {wave.background !== null && Number.isFinite(wave.background.amplitude) && (
            <circle
              cx={at(wave.background, nearestRidge(wave.background.ridge, wave.k, cursorLon))[0]}
              cy={at(wave.background, nearestRidge(wave.background.ridge, wave.k, cursorLon))[1]}
              r={3}
              fill={tokens.sheet}
              stroke={tokens.ink}
              strokeWidth={1}
            />
          )}
          <line
            x1={middle}
            y1={middle}
            x2={at(wave, ridges[0] as number)[0]}
            y2={at(wave, ridges[0] as number)[1]}
            stroke={colour}
            strokeWidth={3.2}
            strokeLinecap="round"
          />
          <circle cx={at(wave, ridges[0] as number)[0]} cy={at(wave, ridges[0] as number)[1]} r={3.6} fill={colour} />
        </>
      )}
      <circle cx={middle} cy={middle} r={1.8} fill={tokens.ink} />
    </svg>
  );
}

/** A row of small polar dials, one per wave: the hand's length is the amplitude, its angle the ridge nearest the cursor. */
export function WaveDials(props: WaveDialsProps) {
  const { waves, units, width, cursorLon, chosen, onChoose } = props;
  const each = width / Math.max(1, waves.length);
  const size = Math.min(104, Math.floor(each - 8));
  return (
    <div className="dials" style={{ display: "grid", gridTemplateColumns: `repeat(${waves.length}, ${each}px)` }}>
      {waves.map((wave) => {
        const words = Number.isFinite(wave.amplitude)
          ? `${wave.amplitude.toFixed(wave.amplitude < 10 ? 1 : 0)} ${units}, ${ridgeText(nearestRidge(wave.ridge, wave.k, cursorLon))}`
          : "missing";
        return (
          <button
            type="button"
            key={wave.k}
            className="dial"
            data-chosen={chosen === wave.k}
            aria-pressed={chosen === wave.k}
            aria-label={`Wave ${wave.k}: ${words}`}
            onClick={() => onChoose(wave.k)}
          >
            <Dial {...props} wave={wave} size={size} />
            <span className="dial-name">
              <span className={chosen === wave.k ? "swiped" : ""}>k {wave.k}</span>
            </span>
            <span className="dial-words">{words}</span>
          </button>
        );
      })}
    </div>
  );
}
