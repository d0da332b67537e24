import { Sheet } from "#renderer/app/sheet.tsx";
import { KeyGroups } from "#renderer/desk/sheets/key-groups.tsx";
import { COMMANDS } from "#renderer/editor/commands/command-table.ts";

/** Every key, made from the desk's command table, and what the pointer does. */
export function KeySheet({ close }: { readonly close: () => void }) {
  return (
    <Sheet title="Keys" close={close} kind="wide-sheet">
      <div class="key-columns">
        <section>
          <h3>Pointer on the section</h3>
          <dl class="key-list">
            <dt>
              <span class="key">click</span>
            </dt>
            <dd>what the foot line says: start, pin, select</dd>
            <dt>
              <span class="key">drag</span>
            </dt>
            <dd>move a node or a pin; elsewhere, move the picture</dd>
            <dt>
              <span class="key">wheel</span>
            </dt>
            <dd>step through the planes</dd>
            <dt>
              <span class="key">Ctrl</span> <span class="key">wheel</span>
            </dt>
            <dd>closer or farther, at the pointer</dd>
            <dt>
              <span class="key">Alt</span>
            </dt>
            <dd>held: the place itself, no snap to a string</dd>
          </dl>
        </section>
        <KeyGroups commands={COMMANDS} />
      </div>
    </Sheet>
  );
}
