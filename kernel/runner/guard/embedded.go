package guard

// Names under which compiled cells embed predeclared types: a field is named
// like its type, and a lower-case name does not cross packages.
type (
	Ɐbool       = bool
	Ɐbyte       = byte
	Ɐrune       = rune
	Ɐstring     = string
	Ɐerror      = error
	Ɐany        = any
	Ɐint        = int
	Ɐint8       = int8
	Ɐint16      = int16
	Ɐint32      = int32
	Ɐint64      = int64
	Ɐuint       = uint
	Ɐuint8      = uint8
	Ɐuint16     = uint16
	Ɐuint32     = uint32
	Ɐuint64     = uint64
	Ɐuintptr    = uintptr
	Ɐfloat32    = float32
	Ɐfloat64    = float64
	Ɐcomplex64  = complex64
	Ɐcomplex128 = complex128
)
