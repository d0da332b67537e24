/**
 * The moments of an intake at which a stopped computer could leave something behind; tests stop at every one. Those of a
 * shard come many times in an intake.
 */
export const CRASH_POINTS = [
  "folder-made", // the unfinished folder exists, empty
  "shard-opened", // a shard file exists, empty
  "bricks-written", // some bricks are in it, not synced
  "shard-written", // all bricks and the index are in it, not synced
  "shard-synced",
  "levels-written", // every level is complete and synced
  "metadata-written", // the store's zarr.json files are written and synced
  "record-written", // specimen.json is written and synced
  "folders-synced", // all names inside the unfinished folder are on the disk
  "renamed", // the specimen has its final name, not yet synced
  "name-synced", // the specimen is whole
] as const;

export type CrashPoint = (typeof CRASH_POINTS)[number];
