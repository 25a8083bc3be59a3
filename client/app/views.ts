import { literal, type StaticValue } from "lit/static-html.js";
import type { ViewName } from "./route.ts";

export interface ViewEntry {
  /** in the navigation and in the window's title */
  readonly word: string;
  /** the view's element: it is given .plant, .feed, .time and .route */
  readonly tag: StaticValue;
  /** the file that defines the element, in a bundle of its own */
  readonly load: () => Promise<unknown>;
}

/** Every view, in the order of the navigation: first what the line needs now, then what it should be judged by, then how well that holds. */
export const views: Record<ViewName, ViewEntry> = {
  watch: { word: "Watch", tag: literal`mill-watch-view`, load: () => import("../views/watch-view.ts") },
  reading: { word: "Reading", tag: literal`mill-reading-view`, load: () => import("../views/reading-view.ts") },
  excursions: {
    word: "Excursions",
    tag: literal`mill-excursions-view`,
    load: () => import("../views/excursions-view.ts"),
  },
  alarms: { word: "Alarms", tag: literal`mill-alarms-view`, load: () => import("../views/alarms-view.ts") },
  handover: { word: "Handover", tag: literal`mill-handover-view`, load: () => import("../views/handover-view.ts") },
  limits: { word: "Limits", tag: literal`mill-limits-view`, load: () => import("../views/limits-view.ts") },
  rehearse: { word: "Rehearse", tag: literal`mill-rehearse-view`, load: () => import("../views/rehearse-view.ts") },
  agreement: {
    word: "Agreement",
    tag: literal`mill-agreement-view`,
    load: () => import("../views/agreement-view.ts"),
  },
  plant: { word: "Plant", tag: literal`mill-plant-view`, load: () => import("../views/plant-view.ts") },
};

export const viewNames = Object.keys(views) as ViewName[];
