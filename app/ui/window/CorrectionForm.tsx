import { useState } from "react";
import { QUANTITIES, type Quantity } from "../../../core/field/quantity.ts";
import type { Correction } from "../../../core/formats/dataset.ts";
import { useSession } from "../session/use-session.tsx";

interface CorrectionFormProps {
  readonly file: string;
  readonly variable: string;
  /** As the file states them; empty where it does not. */
  readonly units: string;
  readonly hasLevels: boolean;
  /** What was said before. */
  readonly said: Correction | null;
  onDone(): void;
}

/** Units that are offered first; any spelling that is known may be typed. */
const OFFERED: Readonly<Record<Quantity, readonly string[]>> = {
  geopotential_height: ["m", "dam", "m2 s-2"],
  eastward_wind: ["m s-1", "kt"],
  northward_wind: ["m s-1", "kt"],
  air_temperature: ["K", "degC"],
};
const NAMES = Object.keys(QUANTITIES) as Quantity[];

/** Where the user says what a variable is, in what units, and on which level. */
export function CorrectionForm({ file, variable, units, hasLevels, said, onDone }: CorrectionFormProps) {
  const session = useSession();
  const [quantity, setQuantity] = useState<Quantity>(said?.quantity ?? "geopotential_height");
  const [typed, setTyped] = useState(said?.units ?? units);
  const [level, setLevel] = useState(said?.level === undefined ? "" : String(said.level));
  const [isApart, setApart] = useState(said?.apart === true);
  const pressure = Number(level);
  const isGood = typed.trim() !== "" && (level.trim() === "" || pressure > 0);
  return (
    <form
      className="row"
      onSubmit={(event) => {
        event.preventDefault();
        if (!isGood) return;
        const stated = typed.trim();
        onDone();
        void session.correct({
          file,
          variable,
          quantity,
          ...(stated === units ? {} : { units: stated }),
          ...(level.trim() === "" ? {} : { level: pressure }),
          ...(isApart ? { apart: true } : {}),
        });
      }}
    >
      <label>
        It is{" "}
        <select
          value={quantity}
          data-testid="correction-quantity"
          onChange={(event) => setQuantity(event.target.value as Quantity)}
        >
          {NAMES.map((name) => (
            <option key={name} value={name}>
              {QUANTITIES[name].title.toLowerCase()}
            </option>
          ))}
        </select>
      </label>
      <label>
        in{" "}
        <input
          size={9}
          value={typed}
          placeholder="units"
          list="offered-units"
          data-testid="correction-units"
          onChange={(event) => setTyped(event.target.value)}
        />
      </label>
      <datalist id="offered-units">
        {OFFERED[quantity].map((one) => (
          <option key={one} value={one} />
        ))}
      </datalist>
      {!hasLevels && (
        <label>
          on{" "}
          <input
            size={5}
            value={level}
            placeholder="no level"
            inputMode="decimal"
            data-testid="correction-level"
            onChange={(event) => setLevel(event.target.value)}
          />{" "}
          hPa
        </label>
      )}
      <label title="Never part of one record with fields of other files">
        <input
          type="checkbox"
          checked={isApart}
          data-testid="correction-apart"
          onChange={(event) => setApart(event.target.checked)}
        />{" "}
        keep apart
      </label>
      <button type="submit" disabled={!isGood} data-testid="correction-set">
        Set
      </button>
      {!isGood && (
        <span className="left-out">{typed.trim() === "" ? "Units are needed." : "A pressure above 0 is needed."}</span>
      )}
    </form>
  );
}
