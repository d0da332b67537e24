import { theme } from "#renderer/app/theme-choice.ts";
import type { SideBySideContext } from "#renderer/study/side-by-side/side-by-side-commands.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SideSwatch } from "#renderer/study/side-by-side/side-swatch.tsx";

/** Which two are compared, A being the reference. */
export function SideBySideHead({ model, context }: { readonly model: SideBySideModel; readonly context: SideBySideContext }) {
  const specimen = model.specimen.value;
  return (
    <header class="head-line">
      <nav aria-label="Where you are" class="crumbs">
        <button type="button" class="button plain" onClick={() => context.screen.backToShelf()}>
          shelf
        </button>
        <span aria-hidden="true">/</span>
        <span>{specimen.name}</span>
        {specimen.synthetic ? <span class="tag">synthetic</span> : null}
        <span aria-hidden="true">/</span>
        <h1>Side by side</h1>
      </nav>
      <p class="pair-sides">
        <SideSwatch side="a" /> <strong>A</strong> {model.a.label} <span class="soft">(reference)</span>
        <SideSwatch side="b" /> <strong>B</strong> {model.b.label}
      </p>
      <div class="head-tools">
        <button type="button" class="button" title="Choose the two sides (Ctrl + O)" onClick={() => context.screen.chooseSides()}>
          sides
        </button>
        <button type="button" class="button" title="Export the comparison (Ctrl + E)" onClick={() => context.screen.openExport()}>
          export
        </button>
        <button type="button" class="button" title="Keys (?)" onClick={() => context.screen.openKeyHelp()}>
          keys
        </button>
        <button type="button" class="button" title="Light or dark (Shift + L)" onClick={() => context.screen.toggleTheme()}>
          {theme.value === "dark" ? "light" : "dark"}
        </button>
      </div>
    </header>
  );
}
