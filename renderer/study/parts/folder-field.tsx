import type { Capabilities } from "#shared/api/capabilities.ts";

export interface FolderFieldProps {
  readonly label: string;
  readonly value: string;
  readonly set: (path: string) => void;
  readonly capabilities: Pick<Capabilities, "pickFolder">;
  readonly disabled: boolean;
}

const LAST_KEY = "tautline-packet-folder";

/** The folder that packets were last written to or taken from; empty before the first. */
export function lastFolder(): string {
  return localStorage.getItem(LAST_KEY) ?? "";
}

export function keepLastFolder(path: string): void {
  localStorage.setItem(LAST_KEY, path);
}

/** A folder on this computer: typed, or chosen. */
export function FolderField({ label, value, set, capabilities, disabled }: FolderFieldProps) {
  const choose = async () => {
    const chosen = await capabilities.pickFolder();
    if (chosen !== null) set(chosen);
  };
  return (
    <div class="path-field">
      <label class="stacked">
        <span>{label}</span>
        <input
          class="field figures"
          value={value}
          spellcheck={false}
          disabled={disabled}
          onInput={(event) => set(event.currentTarget.value)}
        />
      </label>
      <button type="button" class="button" disabled={disabled} onClick={() => void choose()}>
        Choose a folder
      </button>
    </div>
  );
}
