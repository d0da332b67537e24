import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { setPassState } from "#renderer/desk/model/finish-pass.ts";

/** Why nothing can be changed, and the way out where there is one; nothing while the pass can be changed. */
export function WhyReadOnly({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  if (editor.keeper.readOnly) {
    return (
      <div class="banner" role="status">
        Another window has this pass open for writing. This one shows it as it grows; nothing can be changed here.
      </div>
    );
  }
  if (!editor.isFinished.value) return null;
  return (
    <div class="banner finished-banner row" role="status">
      <span>This pass is finished, so nothing in it can be changed.</span>
      <button type="button" class="button" onClick={() => void setPassState(model, "under-way")}>
        Work on it again
      </button>
    </div>
  );
}
