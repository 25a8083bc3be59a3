/** Waits until something holds; fails, naming it, after 15 s. */
export async function until(holds: () => boolean, what: string): Promise<void> {
  const deadline = Date.now() + 15_000;
  while (!holds()) {
    if (Date.now() > deadline) throw new Error(`waited 15 s for ${what}`);
    await new Promise((resolve) => setTimeout(resolve, 10));
  }
}
