/** Lets at most so many deeds be under way at a time. */
export interface Lane {
  /** waits until there is room, then starts the deed; its failure goes to `onError` */
  start(deed: () => Promise<unknown>): Promise<void>;
  /** waits until all are done */
  empty(): Promise<void>;
  readonly underWay: number;
}

export function lane(most: number, onError: (error: Error) => void): Lane {
  const underWay = new Set<Promise<unknown>>();
  return {
    async start(deed) {
      while (underWay.size >= most) await Promise.race(underWay);
      const done: Promise<unknown> = deed()
        .catch(onError)
        .finally(() => underWay.delete(done));
      underWay.add(done);
    },
    async empty() {
      while (underWay.size > 0) await Promise.race(underWay);
    },
    get underWay() {
      return underWay.size;
    },
  };
}
