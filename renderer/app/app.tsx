import { type Signal, useSignal } from "@preact/signals";
import { useEffect } from "preact/hooks";
import { ConnectionBanner } from "#renderer/app/connection-banner.tsx";
import { FolderDialog } from "#renderer/app/folder-dialog.tsx";
import { NoticeList } from "#renderer/app/notice-list.tsx";
import { type Place, placeOf } from "#renderer/app/place.ts";
import type { Services } from "#renderer/app/services.ts";
import { Desk } from "#renderer/desk/desk.tsx";
import { Shelf } from "#renderer/shelf/shelf.tsx";
import { SideBySide } from "#renderer/study/side-by-side/side-by-side.tsx";

export interface AppProps {
  readonly services: Services;
  /** An open question for a scan's path; the page shows the dialog while it is set. */
  readonly scanQuestion: Signal<((path: string | null) => void) | null>;
}

/** The whole page: one screen by the address's fragment, messages and questions above it. */
export function App({ services, scanQuestion }: AppProps) {
  const place = useSignal<Place>(placeOf(location.hash));
  useEffect(() => {
    const follow = () => {
      place.value = placeOf(location.hash);
    };
    addEventListener("hashchange", follow);
    return () => removeEventListener("hashchange", follow);
  }, [place]);
  const shown = place.value;
  return (
    <>
      <ConnectionBanner client={services.client} />
      <Screen services={services} shown={shown} />
      {scanQuestion.value === null ? null : <FolderDialog list={services.client.listFolder} done={scanQuestion.value} />}
      <NoticeList notices={services.notices} />
    </>
  );
}

function Screen({ services, shown }: { readonly services: Services; readonly shown: Place }) {
  switch (shown.screen) {
    case "desk": {
      const { specimen, pass } = shown;
      return <Desk key={`${specimen}/${pass}`} services={services} specimen={specimen} pass={pass} />;
    }
    case "side-by-side": {
      const { specimen, a, b } = shown;
      return <SideBySide key={`${specimen}/${a}/${b}`} services={services} specimen={specimen} a={a} b={b} />;
    }
    case "shelf":
      return <Shelf services={services} />;
  }
}
