import { existsSync, readdirSync, readFileSync } from "node:fs";
import { dirname, join, posix, relative } from "node:path";
import { describe, expect, test } from "vitest";

const ROOT = new URL("..", import.meta.url).pathname;

/** Core's layers; each may import from those before it and from itself. */
const CORE_LAYERS = [
  ["errors.ts", "constants.ts", "units", "wasm"],
  ["field", "grid"],
  ["formats"],
  ["transforms"],
  ["background"],
  ["diagnostics"],
  ["recipe"],
] as const;

/** What each folder of app may import of the other folders of app. `types` = `import type` alone. */
const APP_FOLDERS: Readonly<Record<string, { readonly values: readonly string[]; readonly types: readonly string[] }>> =
  {
    shell: { values: [], types: [] },
    main: { values: ["shell"], types: [] },
    preload: { values: ["shell"], types: [] },
    local: { values: ["shell"], types: [] },
    codecs: { values: [], types: [] },
    worker: { values: ["codecs"], types: [] },
    batch: { values: ["codecs"], types: [] },
    ui: { values: ["worker"], types: ["shell"] },
  };

/** Packages that only some folders may use. */
const PACKAGES: Readonly<Record<string, readonly string[]>> = {
  "plotly.js": ["app/ui"],
  electron: ["app/main", "app/preload"],
  react: ["app/ui"],
  "react-dom": ["app/ui"],
  "plotly.js-dist-min": ["app/ui"],
  "d3-geo": ["app/ui"],
  "topojson-client": ["app/ui"],
  "world-atlas": ["app/ui"],
  // Types alone, which come with those of the chart's packages.
  geojson: ["app/ui"],
  "topojson-specification": ["app/ui"],
  "@fontsource-variable/sofia-sans": ["app/ui"],
  comlink: ["app/worker", "app/ui"],
  h5wasm: ["app/codecs"],
  "fast-png": ["app/codecs"],
  "@cornerstonejs/codec-openjpeg": ["app/codecs"],
};
const NODE_FOLDERS = ["app/shell", "app/main", "app/local", "app/batch"];

interface Import {
  readonly from: string;
  readonly isType: boolean;
}

/** Everything that a source imports: import and export … from, dynamic import(), and workers by new URL. */
function importsOf(source: string): Import[] {
  const plain = source.replaceAll(/\/\*[\s\S]*?\*\//g, "").replaceAll(/(^|[^:])\/\/.*$/gm, "$1");
  const found: Import[] = [];
  for (const [, type, from] of plain.matchAll(/^\s*(?:import|export)\s+(type\s)?[^;"'`]*?from\s*["']([^"']+)["']/gm))
    found.push({ from: from as string, isType: type !== undefined });
  for (const [, from] of plain.matchAll(/^\s*import\s*["']([^"']+)["']/gm))
    found.push({ from: from as string, isType: false });
  for (const [, from] of plain.matchAll(/\bimport\(\s*["']([^"']+)["']/g))
    found.push({ from: from as string, isType: false });
  for (const [, from] of plain.matchAll(/new URL\(\s*["'](\.[^"']+\.ts)["']/g))
    found.push({ from: from as string, isType: false });
  return found;
}

function coreLayer(path: string): number {
  const part = path.split("/")[1] as string;
  return CORE_LAYERS.findIndex((layer) => (layer as readonly string[]).includes(part));
}

function packageName(from: string): string {
  return from
    .split("/")
    .slice(0, from.startsWith("@") ? 2 : 1)
    .join("/");
}

/**
 * Everything in a source that the layers forbid, in words.
 *
 * @param path Relative to the project's root, with `/`.
 */
function violations(path: string, source: string): string[] {
  const faults: string[] = [];
  for (const { from, isType } of importsOf(source)) {
    const fault = (why: string): number => faults.push(`${path} imports ${from}: ${why}`);
    if (from.startsWith(".")) {
      const target = posix.normalize(posix.join(posix.dirname(path), from.replace(/\?.*$/, "")));
      if (path.startsWith("core/")) {
        if (!target.startsWith("core/")) fault("core stands alone");
        else if (coreLayer(target) < 0) fault("the target is in no layer");
        else if (coreLayer(target) > coreLayer(path)) fault("a later layer");
      } else if (target.startsWith("app/")) {
        const [own, other] = [path, target].map((p) => p.split("/")[1] as string) as [string, string];
        const allowed = APP_FOLDERS[own];
        if (allowed === undefined) fault(`app/${own} is in no list of allowed imports`);
        else if (own !== other && !allowed.values.includes(other) && !(isType && allowed.types.includes(other)))
          fault(`app/${own} may not use app/${other}`);
      } else if (!target.startsWith("core/") && target !== "package.json") fault("outside core and app");
      continue;
    }
    const folder = path.split("/").slice(0, 2).join("/");
    if (from.startsWith("node:")) {
      if (!NODE_FOLDERS.includes(folder)) fault("Node's modules are for the folders that run on Node");
      continue;
    }
    const folders = PACKAGES[packageName(from)];
    if (folders === undefined) fault("a package that no folder may use");
    else if (!folders.includes(folder)) fault(`the package is for ${folders.join(", ")}`);
  }
  return faults;
}

function sources(folder: string): string[] {
  if (!existsSync(join(ROOT, folder))) return [];
  return (
    readdirSync(join(ROOT, folder), { recursive: true, withFileTypes: true })
      .filter((entry) => entry.isFile() && /\.tsx?$/.test(entry.name) && !entry.name.endsWith(".d.ts"))
      .map((entry) => relative(ROOT, join(entry.parentPath, entry.name)).replaceAll("\\", "/"))
      // The kernel is AssemblyScript: another language, with no imports.
      .filter((path) => !dirname(path).endsWith("/assembly"))
  );
}

describe("layers", () => {
  const paths = [...sources("core"), ...sources("app")];

  test("core and app are there", () => {
    expect(paths).toContain("core/recipe/engine.ts");
    expect(paths).toContain("app/batch/main.ts");
  });

  test("every file imports only what its layer may (design: core's order; one folder of app per runtime)", () => {
    expect(paths.flatMap((path) => violations(path, readFileSync(join(ROOT, path), "utf8")))).toEqual([]);
  });

  test("every file of core is in a layer", () => {
    expect(paths.filter((path) => path.startsWith("core/") && coreLayer(path) < 0)).toEqual([]);
  });

  test.each([
    ["core/field/slab.ts", 'import { zonalWaves } from "../diagnostics/zonal-waves.ts";', "a later layer"],
    ["core/formats/dataset.ts", 'import type { Recipe } from "../recipe/recipe.ts";', "a later layer"],
    ["core/recipe/engine.ts", 'export { run } from "../../app/batch/command.ts";', "core stands alone"],
    ["core/recipe/engine.ts", 'import { readFile } from "node:fs/promises";', "Node's modules"],
    ["core/recipe/engine.ts", 'const fs = await import("node:fs");', "Node's modules"],
    ["core/grid/rows.ts", 'import {\n  scale,\n} from "d3-geo";', "the package is for app/ui"],
    ["core/grid/rows.ts", 'import _ from "lodash";', "a package that no folder may use"],
    ["core/newcomer/x.ts", 'import "../other/y.ts";', "in no layer"],
    ["app/ui/App.tsx", 'import { run } from "../batch/command.ts";', "app/ui may not use app/batch"],
    ["app/ui/App.tsx", 'import { createShell } from "../shell/shell.ts";', "app/ui may not use app/shell"],
    [
      "app/batch/command.ts",
      'import { startDesk } from "../worker/desk-client.ts";',
      "app/batch may not use app/worker",
    ],
    ["app/worker/desk-worker.ts", 'import { join } from "node:path";', "Node's modules"],
    ["app/worker/desk-worker.ts", 'new Worker(new URL("../ui/draw.ts", import.meta.url));', "may not use app/ui"],
    ["app/main/index.ts", 'import { createRoot } from "react-dom/client";', "the package is for app/ui"],
    ["app/main/index.ts", 'import "../../tests/browser.mjs";', "outside core and app"],
    ["app/fresh/index.ts", 'import "../ui/App.tsx";', "in no list"],
  ])("a violation is found: %s with %j", (path, source, why) => {
    expect(violations(path, source)).toEqual([expect.stringContaining(why)]);
  });

  test.each([
    [
      "core/recipe/engine.ts",
      'import { DataError } from "../errors.ts";\n// import "../../app/x.ts"\n/* from "react" */',
    ],
    ["app/ui/App.tsx", 'import type { Shell } from "../shell/contract.ts";\nimport { useState } from "react";'],
    ["app/ui/App.tsx", 'import { startDesk } from "../worker/desk-client.ts";'],
    ["app/main/index.ts", 'import { app } from "electron";\nimport { createShell } from "../shell/shell.ts";'],
    ["core/transforms/fourier/plain.ts", 'import { x } from "./plan.ts";\nconst s = "import { a } from \'react\'";'],
  ])("what is allowed passes: %s", (path, source) => {
    expect(violations(path, source)).toEqual([]);
  });
});
