export const BROWSER_FLAGS: string[];
export function installedBrowser(): string | null;
export function browserPath(): Promise<string>;
