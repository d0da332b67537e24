import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { PassState } from "#shared/api/specimen.ts";

/** Says that the pass is finished, or under way again. A strand under way is left open, as it is. */
export async function setPassState(model: Pick<DeskModel, "services" | "pass" | "editor">, state: PassState): Promise<void> {
  const { services, pass, editor } = model;
  try {
    if (state === "finished") {
      editor.carried.value = null;
      editor.do({ do: "leave" });
      await editor.settled();
    }
    pass.value = await services.client.setPassState(pass.value.specimen, pass.value.id, state);
    services.notices.news(state === "finished" ? "The pass is finished." : "The pass is under way again.");
  } catch (error) {
    services.notices.failed(error);
  }
}
