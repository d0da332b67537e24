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

export interface ExternalOpening {
  /** Asks the person; nothing leaves the program without a yes. */
  confirm(address: string): Promise<boolean>;
  open(address: string): Promise<void>;
}

/** Opens an address in the system's browser when it may be opened and the person says so; the only place that does. */
export async function openExternal(address: string, { confirm, open }: ExternalOpening): Promise<boolean> {
  const allowed = externalAddress(address);
  if (allowed === null || !(await confirm(allowed))) return false;
  await open(allowed);
  return true;
}
