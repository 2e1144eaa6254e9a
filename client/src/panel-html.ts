import { Uri, type Webview } from 'vscode';

/**
 * The page that the panel's script fills. Nothing comes from elsewhere than the extension's own folder, no script stands in the page, and
 * pictures are data: text of a file can only ever be text.
 */
export function panelHtml(webview: Webview, extensionUri: Uri): string {
  const own = (file: string) => webview.asWebviewUri(Uri.joinPath(extensionUri, 'client/dist', file)).toString();
  const policy = `default-src 'none'; style-src ${webview.cspSource}; script-src ${webview.cspSource}; img-src data:`;
  return `<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${policy}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Pairs</title>
<link rel="stylesheet" href="${own('panel.css')}">
</head>
<body>
<script src="${own('panel.js')}"></script>
</body>
</html>
`;
}
