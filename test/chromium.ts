import { execFileSync } from "node:child_process";
import { existsSync } from "node:fs";

const places = ["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"];

/** The system's Chromium; CHROMIUM names another. undefined when there is none. */
export function findChromium(): string | undefined {
  return [process.env.CHROMIUM, ...places].find((place) => place !== undefined && existsSync(place));
}

/** Before the tests: the browser tests need a real Chromium. Installs Debian's where that is allowed, else says what to install. */
export default function setup(): void {
  if (findChromium()) return;
  const mayInstall = process.getuid?.() === 0 && existsSync("/usr/bin/apt-get");
  if (mayInstall) {
    console.log("no Chromium found: installing Debian's package");
    const environment = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
    const run = (...args: string[]) => execFileSync("apt-get", args, { stdio: "inherit", env: environment });
    run("update", "-q");
    run("install", "-y", "-q", "--no-install-recommends", "chromium");
  }
  if (!findChromium()) {
    throw new Error(
      "No Chromium was found, and the browser tests need one: install Debian's package 'chromium' (apt-get install chromium), or name a Chromium with the environment variable CHROMIUM.",
    );
  }
}
