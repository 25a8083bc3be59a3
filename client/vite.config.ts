import { defineConfig } from "vite";

export default defineConfig({
  root: import.meta.dirname,
  // Absolute: views have paths of their own (/reading/bq-305), and a page that is opened there must still find its files.
  base: "/",
  // No data: URLs: the gateway's content security policy allows files of its own origin only.
  build: { outDir: "../dist/client", emptyOutDir: true, target: "es2022", assetsInlineLimit: 0 },
});
