export interface Remembered<T> {
  get: () => T;
  set: (value: T) => void;
}

/** A setting that this browser keeps. Where storage is closed or holds nonsense, the setting is `otherwise`. */
export function remembered<T>(name: string, otherwise: T): Remembered<T> {
  const key = `millrace.${name}`;
  return {
    get() {
      try {
        const text = localStorage.getItem(key);
        return text === null ? otherwise : (JSON.parse(text) as T);
      } catch {
        return otherwise;
      }
    },
    set(value) {
      try {
        localStorage.setItem(key, JSON.stringify(value));
      } catch {
        // Private windows may refuse: the setting then holds until the page is left.
      }
    },
  };
}
