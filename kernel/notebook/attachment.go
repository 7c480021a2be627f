package notebook

// Attachments returns the files that a Markdown or raw cell carries for its
// text: by name, and each by media type with its content in base64, as it
// stands in the document.
func (c *Cell) Attachments() map[string]map[string]string {
	all := map[string]map[string]string{}
	if v := c.v.get("attachments"); v != nil {
		for _, file := range v.members {
			all[file.key] = map[string]string{}
			for _, m := range file.val.members {
				all[file.key][m.key] = join(m.val)
			}
		}
	}
	return all
}
