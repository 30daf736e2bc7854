// Works on the networks of testdata/editors in VS Code as a user would, by
// keys, and writes one line for every assertion.
// Usage: node test.mjs MODULES PORT WORKSPACE
import { execFileSync } from "node:child_process";
import { appendFileSync, mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { createRequire } from "node:module";

const [modules, port, workspace] = process.argv.slice(2);
const { chromium } = createRequire(`${modules}/node_modules/`)("playwright-core");
const screenshots = process.env.SCREENSHOTS;
const patience = Number(process.env.PATIENCE ?? 40_000); // milliseconds: the first lens can take a while on a slow machine
let failures = 0;
let page;

const sleep = (milliseconds) => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function until(condition) {
  const end = Date.now() + patience;
  while (Date.now() < end) {
    const value = await condition().catch(() => undefined);
    if (value) return value;
    await sleep(100);
  }
  return undefined;
}

function check(what, good, seen) {
  if (!good) failures++;
  const line = good ? `ok ${process.env.NAME}: ${what}` : `FAILED ${process.env.NAME}: ${what}; seen: ${seen}`;
  appendFileSync(process.env.OUTPUT, line + "\n");
}

async function picture(name) {
  if (!screenshots) return;
  mkdirSync(screenshots, { recursive: true });
  await page.screenshot({ path: `${screenshots}/${name}.png` });
}

const read = (name) => readFileSync(`${workspace}/${name}`, "utf8");
const write = (name, text) => writeFileSync(`${workspace}/${name}`, text);

// texts gives the text of every element, with plain spaces.
const texts = async (selector) => (await page.locator(selector).allInnerTexts()).map((text) => text.replaceAll("\u00a0", " "));

async function keys(...list) {
  for (const key of list) {
    await page.keyboard.press(key);
    await sleep(120);
  }
}

async function type(text) {
  await page.keyboard.type(text, { delay: 30 });
}

// palette runs a command by its title.
async function palette(title) {
  await keys("F1");
  await until(async () => page.locator(".quick-input-widget input").isVisible());
  await type(title);
  await until(async () => (await texts(".quick-input-list .monaco-list-row")).some((row) => row.includes(title)));
  await keys("Enter");
  await sleep(300);
}

// go puts the cursor on a text of the saved file, some UTF-16 units into it.
async function go(text, into = 0) {
  const lines = read("logger.plight").split("\n");
  const line = lines.findIndex((l) => l.includes(text));
  if (line < 0) throw new Error(`there is no ${text} in the file`);
  await keys("Escape", "Control+g");
  await type(`${line + 1}:${lines[line].indexOf(text) + 1 + into}`);
  await keys("Enter");
  await sleep(200);
}

async function save() {
  await keys("Control+s");
  await sleep(400);
}

// saved waits until the file on disk holds a text.
const saved = (text, name = "logger.plight") =>
  until(async () => {
    await save();
    return read(name).includes(text);
  });

// problems gives the messages that the editor's problems panel lists.
const problems = () => texts(".markers-panel .monaco-list-row");
const problem = (text) => until(async () => (await problems()).some((row) => row.includes(text)));
const noProblem = (text) => until(async () => !(await problems()).some((row) => row.includes(text)));

// hover shows the hover at the cursor and gives its text.
async function hover() {
  await keys("Control+k", "Control+i");
  return until(async () => {
    const shown = await texts(".monaco-hover:not(.hidden) .hover-contents");
    const text = shown.join("\n");
    return text !== "" && !text.includes("Loading") && text;
  });
}

async function shown() {
  check("the extension colours the file", await until(async () => (await page.locator(".view-line .mtk1, .view-line [class*=mtk]").count()) > 20), "no colours");
  check("finding drawn in the text", await until(async () => page.locator(".squiggly-error").first().isVisible()), "no squiggle");
  await palette("Problems: Focus on Problems View");
  check("finding shown", await problem("there is no part named Ll; did you mean L1?"), await problems());
  await page.locator(".view-lines").first().click();
  await go("Ll]", 1);
  const text = await hover();
  check("hover explains the finding", text?.includes("unknown-name") && text.includes("did you mean L1?"), text);
  await picture("hover-finding");
  check("hover links to the meaning", (await page.locator(".monaco-hover a[href], .monaco-hover a[data-href]").count()) > 0, "no link");
}

async function repaired() {
  await go("Ll]", 1);
  await keys("Control+.");
  const offered = await until(async () => {
    const rows = await texts(".action-widget .monaco-list-row");
    return rows.some((row) => row.includes("Write L1")) && rows;
  });
  await picture("quick-fix");
  await keys("Enter");
  check("quick fix applied", await saved("plus -[𝑅s]-[L1]- rail -["), offered ?? (await texts(".action-widget")));
  check("finding gone after the fix", await noProblem("named Ll"), await problems());
}

async function hovered() {
  await go("port logger", 6);
  const port = await hover();
  check("hover names the port and answers", port?.includes("port logger, + at rail") && port.includes("impedance"), port);
  await picture("hover-port");
  await go("rail -[Rload]", 1);
  const node = await hover();
  check("hover names the node and answers", node?.includes("node rail") && node.includes("Ω"), node);
  check("hover shows the transient as an image", await until(async () => page.locator(".monaco-hover img").first().evaluate((image) => image.naturalWidth > 100)), node);
  const visible = await page.locator(".monaco-hover:not(.hidden)").first().evaluate((box) => {
    const [frame, image] = [box, box.querySelector("img")].map((element) => element?.getBoundingClientRect());
    return image !== undefined && frame.bottom - image.top > 150;
  });
  check("the image is in sight without scrolling", visible, node);
  await picture("hover-node");
  check("answers stand behind their lines", await until(async () => (await texts(".view-line")).some((line) => /tell v\[rail\] at 2 ms.+V/.test(line))), await texts(".view-line"));
  check("facts stand above ports and limits", await until(async () => (await texts(".codelens-decoration")).some((lens) => lens.includes("Ω"))), await texts(".codelens-decoration"));
  await keys("Escape");
  await picture("inlay-and-lens");
}

async function completed() {
  await go("rail -[Rload]");
  await keys("End", "Enter");
  await type("tell v[ra");
  const rows = await until(async () => {
    const list = await texts(".suggest-widget .monaco-list-row");
    return list.some((row) => row.includes("rail")) && list;
  });
  check("completion offers the node", rows, await texts(".suggest-widget"));
  await picture("completion");
  await keys("Enter", "End");
  await type(" at 1 ms");
  check("completion inserts the node", await saved("\ntell v[rail] at 1 ms\n"), read("logger.plight"));
}

async function changed() {
  const before = read("bank.plight");
  write("bank.plight", before.replace("Vlimit", "Vhigh"));
  check("a change of a used file by another program shows up", await problem("nothing named Vlimit"), await problems());
  write("bank.plight", before);
  check("and its undoing too", await noProblem("nothing named Vlimit"), await problems());
}

async function rename(to) {
  const box = page.locator(".rename-box input");
  // A key that comes while the editor still asks where it may rename is lost.
  const open = await until(async () => {
    await keys("F2");
    await sleep(1500);
    return box.isVisible();
  });
  if (!open) throw new Error("no box to rename in");
  await box.fill(to);
  await box.press("Enter");
  await sleep(500);
}

async function renamed() {
  await go("rail -[part", 1);
  await rename("bus");
  check("rename changes every place", (await saved("tell v[bus] at 2 ms")) && !read("logger.plight").includes("rail"), read("logger.plight"));
  await go("<= Vlimit", 4);
  await rename("Vmax");
  await palette("File: Save All Files");
  check("rename reaches the used file", (await saved("<= Vmax")) && (await saved("let Vmax = 15 V", "bank.plight")), read("bank.plight"));
}

async function formatted() {
  const wanted = execFileSync("portlight", ["tidy", `${workspace}/logger.plight`], { encoding: "utf8" });
  await palette("Format Document");
  check("format gives what the command tidy gives", await until(async () => { await save(); return read("logger.plight") === wanted; }), read("logger.plight"));
  check("format aligned the parts", read("logger.plight").includes("inductor        L1     = 47 µH"), read("logger.plight"));
}

async function main() {
  const address = `127.0.0.1:${port}`;
  const browser = await chromium.launch({
    executablePath: "/usr/bin/chromium",
    args: ["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
      "--disable-background-networking", "--disable-component-update", "--disable-sync"],
  });
  try {
    page = await browser.newPage({ viewport: { width: 1280, height: 960 } });
    if (!(await until(async () => (await fetch(`http://${address}/healthz`)).ok))) throw new Error("the server does not answer");
    const open = encodeURIComponent(JSON.stringify([["openFile", `vscode-remote://${address}${workspace}/logger.plight`]]));
    await page.goto(`http://${address}/?folder=${encodeURIComponent(workspace)}&payload=${open}`);
    if (!(await until(async () => page.locator(".view-line").first().isVisible()))) throw new Error("no editor opens");
    for (const step of [shown, repaired, hovered, completed, changed, renamed, formatted]) await step();
  } catch (problem) {
    await picture("stopped").catch(() => {});
    throw problem;
  } finally {
    await browser.close();
  }
}

await main().catch((problem) => check("the test runs to its end", false, problem.stack));
process.exit(failures === 0 ? 0 : 1);
