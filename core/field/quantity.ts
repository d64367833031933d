/** What a field is, by CF standard name where there is one. */
export const QUANTITIES = {
  geopotential_height: { title: "Geopotential height", symbol: "Z", units: "gpm" },
  eastward_wind: { title: "Eastward wind", symbol: "u", units: "m s-1" },
  northward_wind: { title: "Northward wind", symbol: "v", units: "m s-1" },
  air_temperature: { title: "Temperature", symbol: "T", units: "K" },
} as const;

export type Quantity = keyof typeof QUANTITIES;
