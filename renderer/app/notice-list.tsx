import type { Notices } from "#renderer/app/notices.ts";

/** The messages, at the lower right; read out by screen readers as they come. */
export function NoticeList({ notices }: { readonly notices: Notices }) {
  return (
    <section class="notices" aria-label="Messages" aria-live="polite">
      {notices.shown.value.map((notice) => (
        <div key={notice.id} class={`notice ${notice.kind}`} role={notice.kind === "error" ? "alert" : "status"}>
          <p>
            {notice.text}
            {notice.times > 1 ? <span class="soft"> ({notice.times} times)</span> : null}
          </p>
          <div class="notice-actions">
            {notice.actions.map((action) => (
              <button
                key={action.label}
                type="button"
                class="button"
                onClick={() => {
                  notices.putAway(notice.id);
                  action.run();
                }}
              >
                {action.label}
              </button>
            ))}
            <button type="button" class="button plain" onClick={() => notices.putAway(notice.id)}>
              Put away
            </button>
          </div>
        </div>
      ))}
    </section>
  );
}
