/**
 * The address to hand to the system's browser, or null when it must not be opened: only `https:` with a host and no
 * credentials; no file, script, network-share or other program's scheme.
 */
export function externalAddress(address: string): string | null {
  let url: URL;
  try {
    url = new URL(address);
  } catch {
    return null;
  }
  const plain = url.protocol === "https:" && url.hostname !== "" && url.username === "" && url.password === "";
  return plain ? url.href : null;
}

/** Opens an address in the system's browser when it may be opened; the only place that does. Resolves false when it may not. */
export async function openExternal(address: string, open: (address: string) => Promise<void>): Promise<boolean> {
  const allowed = externalAddress(address);
  if (allowed === null) return false;
  await open(allowed);
  return true;
}
