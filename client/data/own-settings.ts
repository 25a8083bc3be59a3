import { type Plant, type Settings, standardSettings } from "../../core/messages/index.ts";
import { api } from "./api.ts";
import { type Remembered, remembered } from "./remembered.ts";

const settleMs = 800;

/**
 * How the person who looks has arranged their screens. Where people sign in the server keeps it, and this browser a copy for the first
 * drawing; where nobody does, the browser alone.
 */
export class OwnSettings {
  value: Settings = standardSettings;
  /** the last change could not be kept by the server; this browser has it */
  trouble: Error | undefined;
  #copy: Remembered<Settings> | undefined;
  #signedIn = false;
  #timer: ReturnType<typeof setTimeout> | undefined;
  readonly #listeners = new Set<() => void>();

  /** Takes over somebody's settings: at once what this browser knows of them, then what the server keeps. */
  async of({ name, signedIn }: Plant["person"]): Promise<void> {
    this.#signedIn = signedIn;
    this.#copy = remembered<Settings>(signedIn ? `settings of ${name}` : "settings", standardSettings);
    this.#take({ ...standardSettings, ...this.#copy.get() });
    if (!signedIn) return;
    try {
      const { settings } = await api.settings();
      if (settings && this.#timer === undefined) this.#take(settings);
    } catch {
      // The browser's copy serves until the page is loaded again.
    }
  }

  change(part: Partial<Settings>): void {
    this.#take({ ...this.value, ...part });
    if (!this.#signedIn) return;
    clearTimeout(this.#timer);
    this.#timer = setTimeout(() => void this.#keep(), settleMs);
  }

  watch(changed: () => void): () => void {
    this.#listeners.add(changed);
    return () => this.#listeners.delete(changed);
  }

  #take(settings: Settings): void {
    this.value = settings;
    this.#copy?.set(settings);
    for (const changed of this.#listeners) changed();
  }

  async #keep(): Promise<void> {
    this.#timer = undefined;
    try {
      await api.keepSettings(this.value);
      this.trouble = undefined;
    } catch (error) {
      this.trouble = error as Error;
    }
    for (const changed of this.#listeners) changed();
  }
}

/** Of the person at this screen. */
export const ownSettings = new OwnSettings();
