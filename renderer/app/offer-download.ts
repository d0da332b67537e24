/** Gives a file to the browser's downloads. */
export function offerDownload(content: Uint8Array<ArrayBuffer> | string, name: string, type: string): void {
  const url = URL.createObjectURL(new Blob([content], { type }));
  const link = document.createElement("a");
  link.href = url;
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}
