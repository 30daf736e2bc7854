// Prints, for every line of the networks named, the line and below it one
// letter a character: the class in which the TextMate grammar colours it.
// ../README.md names the classes.
// Usage: node textmate.mjs MODULES GRAMMAR FILE…
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";

const [modules, grammarFile, ...files] = process.argv.slice(2);
const require = createRequire(`${modules}/node_modules/`);
const textmate = require("vscode-textmate");
const oniguruma = require("vscode-oniguruma");

// The first entry that a character's innermost scope begins with decides.
const classes = [
  ["comment.block.documentation", "M"],
  ["comment", "C"],
  ["string", "S"],
  ["keyword.control", "K"],
  ["keyword.other.unit", "U"],
  ["keyword.other", "K"],
  ["constant.language", "K"],
  ["storage.type", "T"],
  ["entity.name.function.call", "F"],
  ["support.function", "F"],
  ["entity.name.tag", "D"],
  ["entity.name.function", "D"],
  ["entity.name.type", "D"],
  ["variable.other.definition", "D"],
  ["variable.other.constant", "D"],
  ["punctuation.definition.wire", "W"],
  ["keyword.operator.parallel", "W"],
  ["support.variable", "Q"],
  ["constant.numeric", "N"],
];

function letter(scopes) {
  const innermost = scopes[scopes.length - 1];
  const found = classes.find(([prefix]) => innermost.startsWith(prefix));
  return found ? found[1] : " ";
}

await oniguruma.loadWASM(readFileSync(require.resolve("vscode-oniguruma/release/onig.wasm")));
const registry = new textmate.Registry({
  onigLib: Promise.resolve({
    createOnigScanner: (patterns) => new oniguruma.OnigScanner(patterns),
    createOnigString: (text) => new oniguruma.OnigString(text),
  }),
  loadGrammar: async () => textmate.parseRawGrammar(readFileSync(grammarFile, "utf8"), grammarFile),
});
const grammar = await registry.loadGrammar("source.plight");

for (const file of files) {
  let state = textmate.INITIAL;
  for (const line of readFileSync(file, "utf8").replace(/\n$/, "").split("\n")) {
    const result = grammar.tokenizeLine(line, state);
    state = result.ruleStack;
    let marks = "";
    for (const token of result.tokens) {
      for (const character of line.slice(token.startIndex, token.endIndex)) {
        marks += character.trim() === "" ? " " : letter(token.scopes);
      }
    }
    console.log(line + "\n" + marks.trimEnd());
  }
}
