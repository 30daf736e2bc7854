// Starts `portlight serve` for .plight files. All logic is in the server; what
// is here asks for the user's words and reports when the server cannot start.
const fs = require("fs");
const path = require("path");
const vscode = require("vscode");
const { LanguageClient, State } = require("vscode-languageclient/node");

let client;

function command() {
  return vscode.workspace.getConfiguration("portlight").get("command", "portlight");
}

// found says whether there is such a program, before it is started: what the
// editor itself would say names no way out.
function found(program) {
  const folders = program.includes("/") || program.includes(path.sep) ? [""] : (process.env.PATH ?? "").split(path.delimiter);
  const endings = process.platform === "win32" ? ["", ".exe"] : [""];
  return folders.some((folder) => endings.some((ending) => fs.existsSync(path.join(folder, program + ending))));
}

async function refuse(reason) {
  const choice = await vscode.window.showErrorMessage(`Portlight: ${reason}`, "Open the setting");
  if (choice) {
    await vscode.commands.executeCommand("workbench.action.openSettings", "portlight.command");
  }
}

async function start() {
  const program = command();
  if (!found(program)) {
    refuse(`there is no program "${program}". Install it, or say in the setting where it is.`);
    return;
  }
  client = new LanguageClient(
    "portlight",
    "Portlight",
    { command: program, args: ["serve"] },
    { documentSelector: [{ language: "portlight" }], markdown: { isTrusted: false, supportHtml: false } },
  );
  try {
    await client.start();
  } catch (problem) {
    refuse(`"${program} serve" does not answer: ${problem?.message ?? problem}`);
  }
}

async function stop() {
  if (client && client.state === State.Running) {
    await client.stop();
  }
  client = undefined;
}

// ask puts a question to the network in the active editor; the server shows
// the answer in a document of its own.
async function ask() {
  const editor = vscode.window.activeTextEditor;
  if (!editor || editor.document.languageId !== "portlight") {
    vscode.window.showInformationMessage("Open a Portlight network first.");
    return;
  }
  const question = await vscode.window.showInputBox({
    title: "Ask about this network",
    prompt: "What may follow `tell` in a file",
    placeHolder: "poles, z[valve] at 1 kHz, v[coil] at 2 ms, thevenin[valve]",
  });
  if (question) {
    await vscode.commands.executeCommand("portlight.show", editor.document.uri.toString(), question);
  }
}

async function restart() {
  await stop();
  await start();
}

async function activate(context) {
  context.subscriptions.push(
    vscode.commands.registerCommand("portlight.ask", ask),
    vscode.commands.registerCommand("portlight.restart", restart),
    vscode.workspace.onDidChangeConfiguration((change) => {
      if (change.affectsConfiguration("portlight.command")) {
        restart();
      }
    }),
  );
  await start();
}

module.exports = { activate, deactivate: stop };
