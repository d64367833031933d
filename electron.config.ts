import react from "@vitejs/plugin-react";
import { defineConfig } from "electron-vite";

// One build for all that a window needs: Electron's main process, its preload, and the window itself.
// The command-line tools (batch, local host, sample maker) are built by app/launch/build.mjs.
export default defineConfig({
  main: {
    build: {
      outDir: "out/main",
      minify: true,
      rollupOptions: { input: { index: "app/main/index.ts" } },
    },
  },
  preload: {
    build: {
      outDir: "out/preload",
      minify: true,
      rollupOptions: {
        input: { index: "app/preload/index.ts" },
        // A sandboxed preload must be CommonJS.
        output: { format: "cjs", entryFileNames: "[name].cjs" },
      },
    },
  },
  renderer: {
    root: "app/ui",
    base: "./",
    plugins: [react()],
    worker: { format: "es" },
    build: {
      outDir: "out/renderer",
      emptyOutDir: true,
      minify: true,
      target: "chrome110",
      // The policy allows fonts and images from files only.
      assetsInlineLimit: 0,
      chunkSizeWarningLimit: 6000,
      rollupOptions: { input: { index: "app/ui/index.html" } },
    },
  },
});
