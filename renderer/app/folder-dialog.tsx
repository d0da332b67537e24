import { useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { WantedPath } from "#renderer/client/loopback-capabilities.ts";
import type { FolderAnswer } from "#shared/api/routes.ts";

export interface FolderDialogProps {
  readonly wanted: WantedPath;
  readonly list: (path?: string) => Promise<FolderAnswer>;
  /** The chosen file or folder; null = closed without a choice. */
  readonly done: (path: string | null) => void;
}

/** Sizes in the words of file lists. */
function sizeText(bytes: number): string {
  const units = ["bytes", "KB", "MB", "GB", "TB"];
  let value = bytes;
  let unit = 0;
  while (value >= 1000 && unit < units.length - 1) {
    value /= 1000;
    unit += 1;
  }
  return `${unit === 0 ? value : value.toFixed(1)} ${units[unit]}`;
}

const WORDS: Readonly<Record<WantedPath, { readonly title: string; readonly label: string }>> = {
  scan: {
    title: "Choose a scan on this computer",
    label: "Path of the file, or of the folder for a stack of slices or an OME-Zarr store",
  },
  packet: { title: "Choose a packet on this computer", label: "Path of the zip file, or of the packet's folder" },
  folder: { title: "Choose a folder on this computer", label: "Path of the folder" },
};

/** Choosing a file or folder on this computer where the shell has no dialog of its own: a path to type, and folders to walk. */
export function FolderDialog({ wanted, list, done }: FolderDialogProps) {
  const [folder, setFolder] = useState<FolderAnswer | null>(null);
  const [typed, setTyped] = useState("");
  const [failure, setFailure] = useState<string | null>(null);

  const show = async (path?: string) => {
    try {
      const answer = await list(path);
      setFolder(answer);
      setTyped(answer.path);
      setFailure(null);
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
    }
  };
  useEffect(() => void show(), []);

  const shown = folder?.entries.filter((entry) => entry.folder || wanted !== "folder") ?? [];
  const foot = (
    <>
      <button type="button" class="button" onClick={() => done(null)}>
        Cancel
      </button>
      <button type="submit" form="folder-form" class="button main" disabled={typed.trim() === ""}>
        Take this
      </button>
    </>
  );
  return (
    <Sheet title={WORDS[wanted].title} close={() => done(null)} foot={foot} kind="folder-sheet">
      <form
        id="folder-form"
        onSubmit={(event) => {
          event.preventDefault();
          done(typed.trim());
        }}
      >
        <label class="stacked">
          <span>{WORDS[wanted].label}</span>
          <input
            class="field figures"
            value={typed}
            spellcheck={false}
            onInput={(event) => setTyped(event.currentTarget.value)}
          />
        </label>
      </form>
      {failure === null ? null : (
        <p class="warn" role="alert">
          {failure}
        </p>
      )}
      <ul class="folder-list" aria-label="Files and folders">
        {folder?.parent == null ? null : (
          <li>
            <button type="button" class="button plain" onClick={() => void show(folder.parent!)}>
              ↑ one folder up
            </button>
          </li>
        )}
        {shown.map((entry) => (
          <li key={entry.path}>
            <button
              type="button"
              class="button plain"
              aria-pressed={typed === entry.path}
              onClick={() => (entry.folder ? void show(entry.path) : setTyped(entry.path))}
            >
              <span>{entry.folder ? `${entry.name} /` : entry.name}</span>
              <span class="soft figures">{entry.folder ? "folder" : sizeText(entry.bytes)}</span>
            </button>
          </li>
        ))}
      </ul>
    </Sheet>
  );
}
