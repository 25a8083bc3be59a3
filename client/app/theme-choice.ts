import { type ThemeChoice, themes } from "../../core/messages/index.ts";
import { ownSettings } from "../data/own-settings.ts";
import { remembered } from "../data/remembered.ts";

/** What this browser showed last: it holds until somebody's own settings are known, and at the door. */
const last = remembered<ThemeChoice>("theme", "system");
const systemIsDark = matchMedia("(prefers-color-scheme: dark)");

export function chosenTheme(): ThemeChoice {
  return themes.find((theme) => theme === last.get()) ?? "system";
}

export function chooseTheme(theme: ThemeChoice): void {
  ownSettings.change({ theme });
}

/** Puts the theme on the page; `system` follows the computer's, also when that changes later. */
export function showTheme(): void {
  const chosen = chosenTheme();
  document.documentElement.dataset["theme"] = chosen === "system" ? (systemIsDark.matches ? "dark" : "light") : chosen;
}

systemIsDark.addEventListener("change", showTheme);
// Charts take their colours from the theme when they are drawn: on paper everything is ink on white.
addEventListener("beforeprint", () => {
  document.documentElement.dataset["theme"] = "light";
});
addEventListener("afterprint", showTheme);
ownSettings.watch(() => {
  last.set(ownSettings.value.theme);
  showTheme();
});
