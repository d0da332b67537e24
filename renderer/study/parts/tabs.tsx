export interface TabsProps<Name extends string> {
  readonly label: string;
  readonly tabs: readonly { readonly name: Name; readonly label: string }[];
  readonly now: Name;
  readonly choose: (name: Name) => void;
  /** Id of the panel that the tabs change. */
  readonly panel: string;
}

/** Tabs; the arrow keys, Home and End move among them. */
export function Tabs<Name extends string>({ label, tabs, now, choose, panel }: TabsProps<Name>) {
  const go = (list: HTMLElement, index: number) => {
    const tab = tabs[(index + tabs.length) % tabs.length]!;
    choose(tab.name);
    list.querySelector<HTMLElement>(`#tab-${tab.name}`)?.focus();
  };
  const at = tabs.findIndex(({ name }) => name === now);
  return (
    <div
      class="tabs"
      role="tablist"
      aria-label={label}
      onKeyDown={(event) => {
        const steps: Readonly<Record<string, number>> = { ArrowRight: at + 1, ArrowLeft: at - 1, Home: 0, End: -1 };
        const next = steps[event.key];
        if (next === undefined) return;
        event.preventDefault();
        go(event.currentTarget, next);
      }}
    >
      {tabs.map((tab) => (
        <button
          key={tab.name}
          type="button"
          role="tab"
          id={`tab-${tab.name}`}
          class="tab"
          tabIndex={tab.name === now ? 0 : -1}
          aria-selected={tab.name === now}
          aria-controls={panel}
          onClick={() => choose(tab.name)}
        >
          {tab.label}
        </button>
      ))}
    </div>
  );
}
