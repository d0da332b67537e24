import { setTheme, theme } from "#renderer/app/theme-choice.ts";
import type { DeskModel, SheetName } from "#renderer/desk/model/desk-model.ts";
import { setPassState } from "#renderer/desk/model/finish-pass.ts";
import { stepFinding } from "#renderer/desk/model/go-to-finding.ts";
import { handBack } from "#renderer/desk/model/hand-back.ts";
import { openRadiusSheet } from "#renderer/desk/model/open-radius-sheet.ts";
import { playBack } from "#renderer/desk/model/play-back.ts";
import { whatToDismiss } from "#renderer/desk/model/what-to-dismiss.ts";
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
      openExport: () => {
        // What is exported is the pass as it stands.
        editor.stopPlayback();
        model.sheet.value = "export";
      },
      openTakeIn: open("take-in"),
      openAbout: open("about"),
      openUpright: open("upright"),
      nameMark: open("mark"),
      renameTree: open("rename"),
      dismissFinding: () => {
        if (whatToDismiss(model) !== null) model.sheet.value = "dismiss";
      },
      toggleTheme: () => setTheme(theme.value === "dark" ? "light" : "dark"),
      backToShelf: () => services.goTo({ screen: "shelf" }),
      finishPass: () => void setPassState(model, model.pass.value.state === "finished" ? "under-way" : "finished"),
      isAssignment: () => model.assignment.value !== null,
      openRules: open("rules"),
      handBack: () => void handBack(model),
      setRadius: (at) => openRadiusSheet(model, at),
      playBack: () => playBack(model, null),
      stepFinding: (by) => stepFinding(model, by),
      focusSection: () => document.querySelector<HTMLElement>(".section-view")?.focus(),
    },
  };
}
