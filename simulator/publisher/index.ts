export { historyItem, labHistoryItem, readingPayload } from "./payload.ts";
export { type ProcessClock, processClock } from "./process-clock.ts";
export { type Publisher, type PublisherOptions, startPublisher } from "./publisher.ts";
