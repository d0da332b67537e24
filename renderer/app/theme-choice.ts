import { signal } from "@preact/signals";

export type ThemeName = "dark" | "light";
const KEY = "tautline-theme";

/** The theme in use; views that paint by themselves read their colours again when it changes. */
export const theme = signal<ThemeName>("dark");

/** Applies the kept choice, else dark: a scan is judged best in a dark room. */
export function startTheme(): void {
  setTheme(localStorage.getItem(KEY) === "light" ? "light" : "dark");
}

export function setTheme(name: ThemeName): void {
  document.documentElement.dataset.theme = name;
  localStorage.setItem(KEY, name);
  theme.value = name;
}
