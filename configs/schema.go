package configs

// Section is a table of a study file.
type Section struct {
	Name     string // "lattice", "bath.operator"; "" for the top of the file
	Repeated bool   // written [[...]], any number of times
	Doc      string
	Keys     []Key
}

// Key is one key of a section.
type Key struct {
	Name    string
	Short   string // its short name in [scan] and [[case]]; "" for none
	Type    string // in words: "number", "list of integers"
	Default string // in words; "" if it has to be given or may be absent
	Needs   string // when it is allowed or needed; "" for always
	Doc     string
	Scan    bool // whether [scan] and [[case]] may vary it
}

// Schema returns the tables and keys of a study file, in the order in which
// they are explained. Parameters of built-in Hamiltonians are not among them:
// models.All has those.
func Schema() []Section { return nil }
