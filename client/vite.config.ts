import { defineConfig } from "vite";

export default defineConfig({
  root: import.meta.dirname,
  // Absolute: views have paths of their own (/reading/bq-305), and a page that is opened there must still find its files.
  base: "/",
  build: {
    outDir: "../dist/client",
    emptyOutDir: true,
    target: "es2022",
    // No data: URLs: the gateway's content security policy allows files of its own origin only.
    assetsInlineLimit: 0,
    rolldownOptions: {
      treeshake: {
        // The screens take types and a few constants from core's messages: making a schema that nobody asks for has no effect.
        moduleSideEffects: [
          { test: /\/core\//, sideEffects: false },
          { test: /\/node_modules\/typebox\//, sideEffects: false },
        ],
        manualPureFunctions: ["Type", "orNull"],
      },
    },
  },
});
