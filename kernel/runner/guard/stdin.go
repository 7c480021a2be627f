package guard

// Stdin is os.Stdin in a cell: it reads what the reader of the notebook types.
var Stdin input

type input struct{}

func (input) Read(b []byte) (int, error) { return Hooks.Read(b) }

// Scan is fmt.Scan in a cell.
func Scan(a ...any) (n int, err error) { return Hooks.Scan("", a) }

// Scanf is fmt.Scanf in a cell.
func Scanf(format string, a ...any) (n int, err error) { return Hooks.Scan(format, a) }

// Scanln is fmt.Scanln in a cell.
func Scanln(a ...any) (n int, err error) { return Hooks.Scan("\n", a) }
