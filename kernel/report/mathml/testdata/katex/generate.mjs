// Writes mathml.json: KaTeX's MathML for the formulas of formulas.txt and of
// the notebooks (their text, and what they show as text), in display and in
// text style. In what is shown, numbers are live; each is written 7, so that
// a number that changes does not change this file.
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
    const find = (text, change) => {
      for (const m of text.matchAll(/\$\$([^]+?)\$\$|\$([^$]+?)\$/g)) formulas.push(change(m[1] ?? m[2]));
    };
    if (cell.cell_type === "markdown") find([].concat(cell.source).join(""), (f) => f);
    for (const output of cell.outputs ?? [])
      find([].concat(output.data?.["text/markdown"] ?? "").join(""), (f) => f.replace(/\d+/g, "7"));
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
