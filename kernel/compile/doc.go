// Package compile owns the Go toolchain: it turns packages of cell source into
// plugins that the running program can open.
//
// A plugin fits a running program only if both were linked from the same
// packages. So everything a cell may import is compiled once, by [Prepare], and
// its archives are kept in a folder, the kit, with a manifest that says which
// Go made them. [Open] opens a kit and says in words what is wrong with it;
// [Kit.Fits] says whether the running program could open what it builds;
// [Kit.Lookup] hands out the type information in the archives; [Kit.Build]
// compiles packages and links a plugin, calling the compiler and the linker
// directly. After Prepare neither the module's source nor its dependencies nor
// a network are needed, and the source may move.
//
// What has been built is kept in a [Cache], addressed by content: source,
// imports, kit. Several processes may use one cache at once.
//
// Terms: an archive is what the compiler writes for one package (export data
// and object code); a host is a program that opens plugins; the root is the
// folder below which kits and the cache live.
//
// Limits: plugins exist on Linux and macOS; a plugin cannot be unloaded.
package compile
