import { ColorThemeKind, window } from 'vscode';

/** What the server needs to know of the colour theme: a picture in a hover cannot see it. */
export type ThemeKind = 'light' | 'dark' | 'high-contrast';

/** High contrast stands for light lines on black; its light variant is drawn like any light theme. */
export function currentThemeKind(): ThemeKind {
  switch (window.activeColorTheme.kind) {
    case ColorThemeKind.Light:
    case ColorThemeKind.HighContrastLight:
      return 'light';
    case ColorThemeKind.HighContrast:
      return 'high-contrast';
    default:
      return 'dark';
  }
}
