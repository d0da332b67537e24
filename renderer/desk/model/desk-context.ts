import { setTheme, theme } from "#renderer/app/theme-choice.ts";
import type { DeskModel, SheetName } from "#renderer/desk/model/desk-model.ts";
import { stepFinding } from "#renderer/desk/model/go-to-finding.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** What commands act on, for one open desk. */
export function deskContext(model: DeskModel): DeskContext {
  const { services, editor, section } = model;
  const open = (sheet: SheetName) => () => {
    model.sheet.value = sheet;
  };
  return {
    editor,
    view: section,
    screen: {
      openPalette: open("palette"),
      openKeyHelp: open("keys"),
      openMenu: open("menu"),
      toggleHistory: () => {
        model.historyShown.value = !model.historyShown.value;
      },
      openExport: open("export"),
      openTakeIn: open("take-in"),
      openAbout: open("about"),
      openUpright: open("upright"),
      nameMark: open("mark"),
      renameTree: open("rename"),
      dismissFinding: () => {
        if (model.findings.value.some((finding) => finding.key === model.findingAt.value)) model.sheet.value = "dismiss";
      },
      toggleTheme: () => setTheme(theme.value === "dark" ? "light" : "dark"),
      backToShelf: () => services.goTo({ screen: "shelf" }),
      finishPass: () => {
        const { id, specimen, state } = model.pass.value;
        services.client
          .setPassState(specimen, id, state === "finished" ? "under-way" : "finished")
          .then((pass) => {
            model.pass.value = pass;
            services.notices.news(pass.state === "finished" ? "The pass is finished." : "The pass is under way again.");
          })
          .catch((error: unknown) => services.notices.failed(error));
      },
      stepFinding: (by) => stepFinding(model, by),
      focusSection: () => document.querySelector<HTMLElement>(".section-view")?.focus(),
    },
  };
}
