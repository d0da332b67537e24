import "#renderer/app/theme.css";
import "#renderer/app/app.css";
import { signal } from "@preact/signals";
import { render } from "preact";
import { App } from "#renderer/app/app.tsx";
import { Notices } from "#renderer/app/notices.ts";
import { fragmentOf } from "#renderer/app/place.ts";
import { startTheme } from "#renderer/app/theme-choice.ts";
import { Client } from "#renderer/client/client.ts";
import { loopbackCapabilities } from "#renderer/client/loopback-capabilities.ts";
import { takePageToken } from "#renderer/client/page-token.ts";
import { BRIDGE_NAME, type Bridge, desktopCapabilities } from "#shared/api/bridge.ts";

document.title = "Tautline";
startTheme();

const client = new Client({
  fetch: (input, init) => fetch(input, init),
  token: takePageToken(window),
  window: crypto.randomUUID().replaceAll("-", "").slice(0, 20),
});
const scanQuestion = signal<((path: string | null) => void) | null>(null);
const askForScan = () =>
  new Promise<string | null>((resolve) => {
    scanQuestion.value = (path) => {
      scanQuestion.value = null;
      resolve(path);
    };
  });
// The one place where the shells part.
const bridge = (window as { [BRIDGE_NAME]?: Bridge })[BRIDGE_NAME];
const capabilities = bridge === undefined ? loopbackCapabilities(askForScan) : desktopCapabilities(bridge);

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
render(<App services={services} scanQuestion={scanQuestion} />, document.getElementById("app")!);
