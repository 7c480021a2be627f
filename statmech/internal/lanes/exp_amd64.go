package lanes

// exp8 is the loop of Exp for groups of 8 numbers. It writes the lanes whose
// argument is in magnitude below expEnd, says in inside which they are, and
// returns whether any was not.
//
//go:noescape
func exp8(dst, x *float64, inside *uint8, groups int) bool
