import type { DialWave, WaveDialsProps } from "../chart/types.ts";
import { digitsOf, numberText } from "../text/number-text.ts";
import { longitudeText } from "../text/place-text.ts";
import { Dial } from "./Dial.tsx";
import { type DialScale, nearestRidge, ringValues } from "./dial-geometry.ts";

const MOST_SIZE = 104;
/** px between dials, and between a dial's circle and its drawing's edge. */
const GAP = 8;
const EDGE = 4;

/** `308 gpm, 14°W`. */
function handText({ amplitude, ridge, k }: DialWave, units: string, cursorLon: number): string {
  if (!Number.isFinite(amplitude)) return "missing";
  return `${numberText(amplitude, digitsOf(units))} ${units}, ${longitudeText(nearestRidge(ridge, k, cursorLon))}`;
}

/** A row of small polar dials, one per wave: the hand's length is the amplitude, its angle the ridge nearest the cursor. */
export function WaveDials(props: WaveDialsProps) {
  const { waves, units, theme, turn, hemisphere, cursorLon, chosen, largest, linear = false, width, onChoose } = props;
  const each = width / Math.max(1, waves.length);
  const size = Math.max(2 * EDGE + 2, Math.min(MOST_SIZE, Math.floor(each - GAP)));
  const scale: DialScale = {
    middle: size / 2,
    radius: size / 2 - EDGE,
    most: ringValues(largest, linear)[3] as number,
    isLinear: linear,
    turn,
    east: hemisphere === "south" ? -1 : 1,
  };
  return (
    <div className="dials" style={{ display: "grid", gridTemplateColumns: `repeat(${waves.length}, ${each}px)` }}>
      {waves.map((wave, i) => {
        const words = handText(wave, units, cursorLon);
        const isChosen = chosen === wave.k;
        return (
          <button
            type="button"
            key={wave.k}
            className="dial"
            data-chosen={isChosen}
            aria-pressed={isChosen}
            aria-label={`Wave ${wave.k}: ${words}`}
            onClick={() => onChoose(wave.k)}
          >
            <Dial
              wave={wave}
              scale={scale}
              cursorLon={cursorLon}
              theme={theme}
              isChosen={isChosen}
              isNamed={i === 0 && size > 60}
            />
            <span className="dial-name">
              <span className={isChosen ? "swiped" : ""}>k {wave.k}</span>
            </span>
            <span className="dial-words">{words}</span>
          </button>
        );
      })}
    </div>
  );
}
