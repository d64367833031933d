import { numberText } from "./number-text.ts";

/** Longitude turned into [−180, 180). */
export function westEast(lon: number): number {
  const turned = ((((lon + 180) % 360) + 360) % 360) - 180;
  return turned === -180 && lon > 0 ? -180 : turned;
}

function degrees(value: number, digits: number): string {
  // 17.5 keeps its half, 55 stays whole.
  return numberText(Math.abs(value), Number.isInteger(Number(Math.abs(value).toFixed(digits))) ? 0 : digits);
}

/** `14°W`, `107.6°E`, `0°`. */
export function longitudeText(lon: number, digits = 0): string {
  const turned = westEast(lon);
  const text = degrees(turned, digits);
  if (Number(text) === 0) return "0°";
  if (Number(text) === 180) return "180°";
  return `${text}°${turned < 0 ? "W" : "E"}`;
}

/** `55°N`, `2.5°S`, `0°`. */
export function latitudeText(lat: number, digits = 1): string {
  const text = degrees(lat, digits);
  return Number(text) === 0 ? "0°" : `${text}°${lat < 0 ? "S" : "N"}`;
}

/** `55°N`, `50–60°N`, `10°S–10°N`. */
export function bandText([south, north]: readonly [number, number]): string {
  if (south === north) return latitudeText(south);
  if (south >= 0) return `${degrees(south, 1)}–${latitudeText(north)}`;
  if (north <= 0) return `${degrees(north, 1)}–${latitudeText(south)}`;
  return `${latitudeText(south)}–${latitudeText(north)}`;
}
