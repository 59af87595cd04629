package kinetic

// CompileWide compiles without tables by pattern, whether or not they would do.
func CompileWide(s Spec) (*Generator, error) { return compile(s, true) }
