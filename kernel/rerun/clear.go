package rerun

import "levelsum/kernel/notebook"

// Clear takes out of a document what running it has put there: outputs,
// numbers of runs and the provenance.
func Clear(d *notebook.Document) error {
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code {
			continue
		}
		c.SetExecutionCount(0)
		if err := c.SetOutputs(nil); err != nil {
			return err
		}
	}
	removeProvenance(d)
	return nil
}
