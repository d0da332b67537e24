import "#renderer/app/theme.css";
import "#renderer/app/app.css";
import { signal } from "@preact/signals";
import { render } from "preact";
import { App, type PathQuestion } from "#renderer/app/app.tsx";
import { Notices } from "#renderer/app/notices.ts";
import { fragmentOf } from "#renderer/app/place.ts";
import { startTheme } from "#renderer/app/theme-choice.ts";
import { Client } from "#renderer/client/client.ts";
import { loopbackCapabilities, type WantedPath } from "#renderer/client/loopback-capabilities.ts";
import { takePageToken } from "#renderer/client/page-token.ts";
import { BRIDGE_NAME, type Bridge, desktopCapabilities } from "#shared/api/bridge.ts";

document.title = "Tautline";
startTheme();

const client = new Client({
  fetch: (input, init) => fetch(input, init),
  token: takePageToken(window),
  window: crypto.randomUUID().replaceAll("-", "").slice(0, 20),
});
const pathQuestion = signal<PathQuestion | null>(null);
const askForPath = (wanted: WantedPath) =>
  new Promise<string | null>((resolve) => {
    const answer = (path: string | null) => {
      pathQuestion.value = null;
      resolve(path);
    };
    pathQuestion.value = { wanted, answer };
  });
// The one place where the shells part.
const bridge = (window as { [BRIDGE_NAME]?: Bridge })[BRIDGE_NAME];
const capabilities = bridge === undefined ? loopbackCapabilities(askForPath) : desktopCapabilities(bridge);

const services = {
  client,
  capabilities,
  notices: new Notices(),
  goTo: (place: Parameters<typeof fragmentOf>[0]) => {
    location.hash = fragmentOf(place);
  },
};
client.connect();
// The address of a newer run, opened in this very page: its token is taken by loading anew.
addEventListener("hashchange", () => {
  if (location.hash.includes("token=")) location.reload();
});
addEventListener("pagehide", () => client.bye());
render(<App services={services} pathQuestion={pathQuestion} />, document.getElementById("app")!);
