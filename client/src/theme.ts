import { ColorThemeKind, window } from 'vscode';
import type { ThemeKind } from '../../server/src/lsp/protocol';

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
