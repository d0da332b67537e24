import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { Notices } from "#renderer/app/notices.ts";
import { TautlineError } from "#shared/errors.ts";

describe("messages", () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());

  it("that are errors stay until they are put away; news goes by itself", () => {
    const notices = new Notices();
    notices.error("bad");
    notices.news("done");
    vi.advanceTimersByTime(60_000);
    expect(notices.shown.value.map((notice) => notice.text)).toEqual(["bad"]);
    notices.putAway(notices.shown.value[0]!.id);
    expect(notices.shown.value).toEqual([]);
  });

  it("are counted instead of repeated", () => {
    const notices = new Notices();
    notices.error("bad");
    notices.error("bad");
    expect(notices.shown.value).toMatchObject([{ text: "bad", times: 2 }]);
  });

  it("say nothing of work that was stopped or taken over", () => {
    const notices = new Notices();
    notices.failed(new TautlineError("superseded", "s", { lane: "guide", number: 1 }));
    notices.failed(new TautlineError("cancelled", "c", { what: "x" }));
    notices.failed(new TautlineError("not-found", "There is none.", { what: "x", id: "y" }));
    expect(notices.shown.value.map((notice) => notice.text)).toEqual(["There is none."]);
  });
});
