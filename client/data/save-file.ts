/** Hands a text to the person as a file. */
export function saveFile(name: string, text: string): void {
  const link = document.createElement("a");
  link.href = URL.createObjectURL(new Blob([text], { type: "text/csv;charset=utf-8" }));
  link.download = name;
  link.click();
  URL.revokeObjectURL(link.href);
}

/** "bq-305 2026-12-01T14-05-12Z.csv": a name that every file system takes. */
export function fileName(stream: string, at: number): string {
  return `${stream} ${new Date(at)
    .toISOString()
    .replace(/\.\d+Z$/, "Z")
    .replaceAll(":", "-")}.csv`;
}
