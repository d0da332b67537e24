import { type Signal, useSignal } from "@preact/signals";
import { useEffect } from "preact/hooks";
import { ConnectionBanner } from "#renderer/app/connection-banner.tsx";
import { FolderDialog } from "#renderer/app/folder-dialog.tsx";
import { NoticeList } from "#renderer/app/notice-list.tsx";
import { type Place, placeOf } from "#renderer/app/place.ts";
import type { Services } from "#renderer/app/services.ts";
import type { WantedPath } from "#renderer/client/loopback-capabilities.ts";
import { Desk } from "#renderer/desk/desk.tsx";
import { Shelf } from "#renderer/shelf/shelf.tsx";
import { SideBySide } from "#renderer/study/side-by-side/side-by-side.tsx";
import { Study } from "#renderer/study/study.tsx";

export interface AppProps {
  readonly services: Services;
  /** An open question for a path on this computer; the page shows the dialog while it is set. */
  readonly pathQuestion: Signal<PathQuestion | null>;
}

export interface PathQuestion {
  readonly wanted: WantedPath;
  readonly answer: (path: string | null) => void;
}

/** The whole page: one screen by the address's fragment, messages and questions above it. */
export function App({ services, pathQuestion }: AppProps) {
  const place = useSignal<Place>(placeOf(location.hash));
  useEffect(() => {
    const follow = () => {
      place.value = placeOf(location.hash);
    };
    addEventListener("hashchange", follow);
    return () => removeEventListener("hashchange", follow);
  }, [place]);
  const shown = place.value;
  const question = pathQuestion.value;
  return (
    <>
      <ConnectionBanner client={services.client} />
      <Screen services={services} shown={shown} />
      {question === null ? null : (
        <FolderDialog wanted={question.wanted} list={services.client.listFolder} done={question.answer} />
      )}
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
    case "study":
      return <Study key={shown.study} services={services} study={shown.study} part={shown.part} />;
    case "shelf":
      return <Shelf services={services} handBack={shown.handBack ?? null} />;
  }
}
