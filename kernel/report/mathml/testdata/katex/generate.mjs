// Writes mathml.json: KaTeX's MathML for the formulas of formulas.txt and of
// the notebooks, in display and in text style.
//
//   npm install katex@0.19.1
//   node generate.mjs FOLDER-OF-NOTEBOOKS > mathml.json
//
// Run it in a copy of this folder outside the repository. KaTeX is under the
// MIT licence, copyright Khan Academy and contributors.
import fs from "node:fs";
import path from "node:path";
import katex from "katex";

const formulas = fs.readFileSync("formulas.txt", "utf8").split("\n").filter((l) => l && !l.startsWith("#"));
const folder = process.argv[2];
for (const file of fs.readdirSync(folder).filter((f) => f.endsWith(".ipynb")).sort()) {
  for (const cell of JSON.parse(fs.readFileSync(path.join(folder, file), "utf8")).cells) {
    if (cell.cell_type !== "markdown") continue;
    const text = [].concat(cell.source).join("");
    for (const m of text.matchAll(/\$\$([^]+?)\$\$|\$([^$]+?)\$/g)) formulas.push(m[1] ?? m[2]);
  }
}
const render = (f, displayMode) =>
  katex
    .renderToString(f, { displayMode, output: "mathml", throwOnError: true, strict: "ignore" })
    .replace(/^<span class="katex">|<\/span>$/g, "")
    .replace(/<annotation[^]*<\/annotation>/, "");
console.log(
  JSON.stringify(
    {
      source: `KaTeX ${katex.version}, npm package katex, MIT licence`,
      "how obtained": "generate.mjs beside this file",
      formulas: [...new Set(formulas)].map((f) => ({ formula: f, display: render(f, true), inline: render(f, false) })),
    },
    null,
    1,
  ),
);
