import { defineConfig } from "vitest/config";

const full = process.env.MILLRACE_FULL === "1";

export default defineConfig({
  root: `${import.meta.dirname}/..`,
  test: {
    include: ["test/**/*.test.ts"],
    globalSetup: ["test/chromium.ts", "test/mosquitto.ts", "test/models.ts"],
    reporters: ["default", "./test/closing-line.ts"],
    // Two cores: the real chain has a service, a simulator and a browser of its own beside each worker.
    maxWorkers: 2,
    testTimeout: full ? 600_000 : 60_000,
    hookTimeout: 120_000,
  },
});
