import type { ThemeName } from "../theme/tokens.ts";

export interface ChartView {
  readonly kind: "hemisphere" | "belt";
  readonly hemisphere: "north" | "south";
  /** Longitude at the foot of the hemisphere chart, degrees east. */
  readonly turn: number;
  /** Longitude at the left edge of the belt chart, degrees east. */
  readonly cut: number;
}

export interface ChartGrid {
  /** Degrees north, south → north. */
  readonly lat: Float64Array;
  /** Degrees east, west → east. */
  readonly lon: Float64Array;
  readonly closesCircle: boolean;
}

export interface ChartShading {
  /** (nLat, nLon); departures, centred on zero; NaN is drawn as masked. */
  readonly values: Float32Array;
  readonly step: number;
  readonly units: string;
}

export interface ChartContours {
  readonly values: Float32Array;
  readonly interval: number;
  /** For the key; the shading's units where it is left out. */
  readonly units?: string;
  /** Each how many lines one is bold and labelled. */
  readonly boldEach: number;
}

/** Curve round the rim (hemisphere) or along the foot (belt): the departure along the band, with the leading wave in it. */
export interface ChartRim {
  /** Along the grid's longitudes. */
  readonly values: Float32Array;
  readonly wave: { readonly k: number; readonly amplitude: number; readonly ridge: number } | null;
}

export interface ChartLayers {
  readonly grid: ChartGrid;
  readonly contours: ChartContours | null;
  readonly shading: ChartShading | null;
  readonly cursor: { readonly lat: number; readonly lon: number };
  /** South and north edge; equal = one row. Drawn dotted. */
  readonly band: readonly [number, number];
  readonly rim: ChartRim | null;
  /** Lines at the chart's upper left: what, level, when. The first is bold. */
  readonly caption: readonly string[];
  /** Lines at its upper right: the cursor's place and values. The first is bold. */
  readonly readout: readonly string[];
  /** Why masked cells are masked. */
  readonly maskWords: string;
}

export interface ChartProps {
  readonly view: ChartView;
  readonly layers: ChartLayers;
  readonly theme: ThemeName;
  readonly width: number;
  readonly height: number;
  /** The last picture stays, at 40 %, while numbers are on their way. */
  readonly isWaiting?: boolean;
  onCursor(lat: number, lon: number): void;
  /** The hemisphere was pulled round with Shift held. */
  onTurn?(turn: number): void;
  /** The belt was pulled along with Shift held. */
  onCut?(cut: number): void;
  /** Where the pointer is; null once it has left the map. */
  onHover?(place: { readonly lat: number; readonly lon: number } | null): void;
}

export interface DialHand {
  readonly amplitude: number;
  /** Degrees east of one ridge. */
  readonly ridge: number;
}

export interface DialWave extends DialHand {
  readonly k: number;
  /** Oldest first, today's last. */
  readonly trail: readonly DialHand[];
  readonly background: DialHand | null;
}

export interface WaveDialsProps {
  readonly waves: readonly DialWave[];
  readonly units: string;
  readonly theme: ThemeName;
  /** Longitude at the dial's foot, as the chart's. */
  readonly turn: number;
  /** East runs as on that hemisphere's chart; north unless given. */
  readonly hemisphere?: "north" | "south";
  readonly cursorLon: number;
  /** Wavenumber of the chosen wave. */
  readonly chosen: number | null;
  /** The largest amplitude of the record, for the rings; the scale goes with the root of the amplitude unless `linear`. */
  readonly largest: number;
  readonly linear?: boolean;
  readonly width: number;
  onChoose(k: number): void;
}

export interface ShareBar {
  /** "k 3", "k 9+", "mean". */
  readonly label: string;
  /** Wavenumber for the colour; 9 stands for the shorter ones together. */
  readonly k: number;
  readonly value: number;
}

export interface ShareBarsProps {
  readonly shares: readonly ShareBar[];
  readonly total: number;
  readonly units: string;
  readonly theme: ThemeName;
  readonly width: number;
}
