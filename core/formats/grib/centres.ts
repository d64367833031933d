/** Originating centres that people meet; WMO common code table C-11 (C-1). */
const CENTRES: Readonly<Record<number, string>> = {
  7: "NCEP (Washington)",
  8: "NWS (United States)",
  34: "Japan Meteorological Agency (Tokyo)",
  38: "China Meteorological Administration (Beijing)",
  40: "Korea Meteorological Administration (Seoul)",
  54: "Canadian Meteorological Centre (Montreal)",
  60: "NCAR",
  74: "UK Met Office (Exeter)",
  78: "Deutscher Wetterdienst (Offenbach)",
  85: "Météo-France (Toulouse)",
  98: "ECMWF",
};

export function centreName(centre: number): string {
  return CENTRES[centre] ?? `centre ${centre}`;
}
