import type { WindowDatabase } from "#renderer/storage/window-database.ts";

/** Settings of this window (theme, layout, sticky labels): plain values by key, shared by all its pages. */
export class Settings {
  private readonly database: WindowDatabase;

  constructor(database: WindowDatabase) {
    this.database = database;
  }

  /** The value kept under `key`; undefined when there is none. Callers check its shape: an older program may have written it. */
  async get(key: string): Promise<unknown> {
    return (await this.database.settings.get(key))?.value;
  }

  async set(key: string, value: unknown): Promise<void> {
    await this.database.settings.put({ key, value });
  }

  async remove(key: string): Promise<void> {
    await this.database.settings.delete(key);
  }
}
