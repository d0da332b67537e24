import { setTheme, theme } from "#renderer/app/theme-choice.ts";
import type { SideBySideContext } from "#renderer/study/side-by-side/side-by-side-commands.ts";
import type { SheetName, SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";

/** What commands act on, for one comparison on screen. */
export function sideBySideContext(model: SideBySideModel): SideBySideContext {
  const open = (sheet: SheetName) => () => {
    model.sheet.value = sheet;
  };
  return {
    view: model.section,
    pair: {
      count: () => model.differences.value.length,
      step: (by) => model.step(by),
      stripSide: () => model.stripSide.value,
      otherSide: () => model.otherSide(),
      isRunning: () => model.run.state.value.kind === "running",
      cancel: () => model.run.cancel(),
    },
    screen: {
      focusSection: () => document.querySelector<HTMLElement>(".section-view")?.focus(),
      toggleTheme: () => setTheme(theme.value === "dark" ? "light" : "dark"),
      openExport: open("export"),
      openKeyHelp: open("keys"),
      chooseSides: open("sides"),
      backToShelf: () => model.services.goTo({ screen: "shelf" }),
    },
  };
}
