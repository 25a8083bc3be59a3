/** Hands a text (CSV) or a picture to the person as a file. */
export function saveFile(name: string, content: string | Blob): void {
  const link = document.createElement("a");
  const blob = typeof content === "string" ? new Blob([content], { type: "text/csv;charset=utf-8" }) : content;
  link.href = URL.createObjectURL(blob);
  link.download = name;
  link.click();
  URL.revokeObjectURL(link.href);
}

/** "bq-305 2026-12-01T14-05-12Z.csv": a name that every file system takes. */
export function fileName(stream: string, at: number, kind: "csv" | "png" = "csv"): string {
  return `${stream} ${new Date(at)
    .toISOString()
    .replace(/\.\d+Z$/, "Z")
    .replaceAll(":", "-")}.${kind}`;
}
