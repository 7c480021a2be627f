//go:build !race

package compile

// Race says whether the running program was built with -race.
const Race = false
