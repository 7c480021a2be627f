// Package notebook reads and writes notebook documents of the nbformat 4
// family (4.0 to 4.5, and later minor versions as far as they keep to the
// same rules).
//
//	d, err := notebook.Read("copper.ipynb")
//	for _, c := range d.Cells() {
//		if c.Kind() == notebook.Code {
//			c.SetOutputs(outputs)
//		}
//	}
//	err = d.Write("copper.ipynb")
//
// A document is kept as the tree of JSON values that the file holds: fields
// that this package does not know, the order of keys and the spelling of
// numbers and strings stay as they were. What is written has the layout that
// the format's own tools write (one space a level, text in lines, a newline at
// the end; CR LF at the ends of lines if all of the file's had it), so that a
// front end that saves the file again changes nothing.
//
// A document that breaks the rules of its version is refused with the cell and
// the field named, see [FormatError]. Two things are mended instead and noted
// in [Document.Mended]: a cell of version 4.5 without an id gets one, and the
// second of two equal ids is replaced. Ids are made from the cell's place and
// text, so the same document always gets the same ones. Unknown fields and,
// from version 4.6 on, unknown kinds of cells and outputs are kept.
package notebook
