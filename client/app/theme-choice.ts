import { remembered } from "../data/remembered.ts";

export const themes = ["system", "light", "dark"] as const;
export type ThemeChoice = (typeof themes)[number];

const choice = remembered<ThemeChoice>("theme", "system");
const systemIsDark = matchMedia("(prefers-color-scheme: dark)");

export function chosenTheme(): ThemeChoice {
  return themes.find((theme) => theme === choice.get()) ?? "system";
}

export function chooseTheme(theme: ThemeChoice): void {
  choice.set(theme);
  showTheme();
}

/** Puts the theme on the page; `system` follows the computer's, also when that changes later. */
export function showTheme(): void {
  const chosen = chosenTheme();
  document.documentElement.dataset["theme"] = chosen === "system" ? (systemIsDark.matches ? "dark" : "light") : chosen;
}

systemIsDark.addEventListener("change", showTheme);
