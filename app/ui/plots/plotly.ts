/** What is used of Plotly; its own declarations disagree between its two packages. */
export interface Plotly {
  react(place: HTMLElement, data: readonly unknown[], layout: object, config: object): Promise<unknown>;
  purge(place: HTMLElement): void;
}

let loading: Promise<Plotly> | null = null;

/** Id under which the bundle's map part would put a style of its own, which the page's policy refuses; we draw no such maps. */
const UNUSED_STYLE = "ce8d464691048653ffe3a57c6c18ab566e8366f186677868cf724621a857b4fe";

/** Plotly takes seconds to load, so it comes after the first chart, once. */
export function plotly(): Promise<Plotly> {
  if (loading === null) {
    const stand = document.createElement("meta");
    stand.id = UNUSED_STYLE;
    document.head.append(stand);
    loading = import("plotly.js-dist-min").then(
      (module) => (module as unknown as { default?: Plotly }).default ?? (module as unknown as Plotly),
    );
  }
  return loading;
}

export const PLOT_CONFIG = { displayModeBar: false, staticPlot: true, responsive: false } as const;
