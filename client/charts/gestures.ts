/** What a person asks of a chart over time with pointer, wheel or keys. Shares are of the plotting area's width. */
export interface GestureAnswers {
  pan: (share: number) => void;
  /** factor > 1 widens; `at` is the share from the left that stays in place */
  zoom: (factor: number, at: number) => void;
  point: (at: number | undefined) => void;
  open: (at: number) => void;
}

const clickReachPx = 4;
/** A wheel that was scrolling the page goes on scrolling it when a chart comes under the pointer. */
const scrollRestMs = 350;
let pageScrolledAt = 0;
let listening = false;

function watchPageScroll(): void {
  if (listening) return;
  listening = true;
  addEventListener(
    "scroll",
    () => {
      pageScrolledAt = performance.now();
    },
    { passive: true, capture: true },
  );
}

/** Drag pans, the wheel zooms (sideways it pans), two fingers zoom, a click opens. Returns how to stop listening. */
export function listenForGestures(area: HTMLElement, answers: GestureAnswers): () => void {
  watchPageScroll();
  const held = new Map<number, number>();
  let startX = 0;
  let moved = false;
  const stop = new AbortController();
  const on = <K extends keyof HTMLElementEventMap>(
    kind: K,
    heard: (event: HTMLElementEventMap[K]) => void,
    options: AddEventListenerOptions = {},
  ) => area.addEventListener(kind, heard, { ...options, signal: stop.signal });
  const shareOf = (x: number) => {
    const box = area.getBoundingClientRect();
    return box.width ? (x - box.left) / box.width : 0;
  };
  area.style.touchAction = "pan-y";

  on("pointerdown", (event) => {
    if (event.button !== 0) return;
    held.set(event.pointerId, event.clientX);
    if (held.size === 1) {
      startX = event.clientX;
      moved = false;
    } else moved = true;
    area.setPointerCapture(event.pointerId);
  });
  on("pointermove", (event) => {
    const before = held.get(event.pointerId);
    if (before === undefined) {
      answers.point(shareOf(event.clientX));
      return;
    }
    if (Math.abs(event.clientX - startX) > clickReachPx) moved = true;
    if (!moved) return;
    const others = [...held].filter(([id]) => id !== event.pointerId);
    held.set(event.pointerId, event.clientX);
    if (others.length === 0) {
      answers.pan(shareOf(before) - shareOf(event.clientX));
      return;
    }
    const anchor = others[0][1];
    const [was, is] = [Math.abs(before - anchor), Math.abs(event.clientX - anchor)];
    if (was > 10 && is > 10) answers.zoom(was / is, shareOf(anchor));
  });
  const release = (event: PointerEvent) => {
    const wasHeld = held.delete(event.pointerId);
    if (wasHeld && held.size === 0 && !moved && event.type === "pointerup") answers.open(shareOf(event.clientX));
  };
  on("pointerup", release);
  on("pointercancel", release);
  on("pointerleave", () => {
    if (held.size === 0) answers.point(undefined);
  });
  on(
    "wheel",
    (event) => {
      if (!event.ctrlKey && performance.now() - pageScrolledAt < scrollRestMs) return;
      event.preventDefault();
      const sideways = event.shiftKey ? event.deltaY || event.deltaX : event.deltaX;
      if (event.shiftKey || Math.abs(event.deltaX) > Math.abs(event.deltaY)) {
        answers.pan(sideways / 800);
        return;
      }
      const step = Math.max(-1, Math.min(1, event.deltaY / 100));
      answers.zoom(1.25 ** step, shareOf(event.clientX));
    },
    { passive: false },
  );
  return () => stop.abort();
}
