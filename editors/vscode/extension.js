// Starts `portlight serve` for .plight files; all logic is in the server.
const vscode = require("vscode");
const { LanguageClient } = require("vscode-languageclient/node");

let client;

async function activate(context) {
  const command = vscode.workspace.getConfiguration("portlight").get("command", "portlight");
  client = new LanguageClient(
    "portlight",
    "Portlight",
    { command, args: ["serve"] },
    { documentSelector: [{ language: "portlight" }], markdown: { isTrusted: false } },
  );
  context.subscriptions.push({ dispose: () => client && client.stop() });
  try {
    await client.start();
  } catch (problem) {
    vscode.window.showErrorMessage(
      `Portlight could not start "${command} serve": ${problem.message}. ` +
        `Set "portlight.command" to where the program is.`,
    );
  }
}

function deactivate() {
  return client && client.stop();
}

module.exports = { activate, deactivate };
