// Finds an installed Chromium-family browser for the browser tests, or brings Debian's on a machine where we may.
import { spawnSync } from "node:child_process";
import { existsSync } from "node:fs";

const PLACES = [
  process.env.TAUTLINE_BROWSER,
  "/usr/bin/chromium",
  "/usr/bin/chromium-browser",
  "/usr/bin/google-chrome",
  "/usr/bin/google-chrome-stable",
  "/usr/bin/microsoft-edge",
  "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
  "/Applications/Chromium.app/Contents/MacOS/Chromium",
  "/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge",
  "C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe",
  "C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe",
];

/** Path of an installed browser, or undefined. */
export function findBrowser() {
  return PLACES.find((place) => place && existsSync(place));
}

/** Path of a browser, installing Debian's when there is none and this is root on a machine with apt. */
export function bringBrowser() {
  const found = findBrowser();
  if (found) return found;
  const mayInstall = process.getuid?.() === 0 && existsSync("/usr/bin/apt-get");
  if (mayInstall) {
    console.log("No Chromium-family browser is installed: installing Debian's chromium for the browser tests.");
    const env = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
    const apt = (...args) => spawnSync("apt-get", args, { stdio: ["ignore", "inherit", "inherit"], env }).status === 0;
    if (apt("update", "-qq") && apt("install", "-y", "-qq", "--no-install-recommends", "chromium", "xvfb", "fonts-dejavu-core"))
      return findBrowser();
  }
  return undefined;
}

if (process.argv[1] && import.meta.url.endsWith(process.argv[1].replaceAll("\\", "/").split("/").pop())) {
  const browser = bringBrowser();
  if (!browser) {
    console.error(
      "The browser tests need Chrome, Chromium or Edge. Install one (Debian: apt-get install chromium), or name its program in TAUTLINE_BROWSER, and run npm test again.",
    );
    process.exit(1);
  }
  console.log(`browser: ${browser}`);
}
