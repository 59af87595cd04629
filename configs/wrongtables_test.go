package configs

import (
	"strconv"
	"strings"
)

var wrongSyntax = []wrong{
	{name: "no value", old: "beta = 0.4", new: "beta = ▸\n", want: []string{"bath.beta: has no value"}},
	{name: "unquoted word", old: `model = "ising"`, new: `model = ▸ising`, want: []string{"hamiltonian.model: a word is written in quotes: \"ising\""}},
	{name: "unquoted word in a list", old: "size = [8, 8]", new: `boundary = ["open", ▸periodic]`, want: []string{"lattice.boundary: a word is written in quotes: \"periodic\""}},
	{name: "capital truth", old: "[trajectory]", new: "[[observable]]\nkind = \"energy\"\nsingle = ▸True\n[trajectory]", want: []string{"observable.single: True is written true"}},
	{name: "unfinished list", old: "size = [8, 8]\n[hamiltonian]", new: "size = [8, 8\n▸[hamiltonian]", want: []string{": not valid TOML"}},
	{name: "text behind a value", old: "beta = 0.4", new: "beta = 0.4 ▸K", want: []string{"bath.beta: not valid TOML"}},
	{name: "columns count characters", old: `title = "Coldest shelf"`, new: `title = "Kältestes Fach" ▸x`, want: []string{"title: not valid TOML"}},
	{name: "place inside a character", old: "[trajectory]\nsettle = 10.0\nspan = 100.0\nstep = 0.5\n", new: "law = \"榊▸榊", want: []string{"bath.law: not valid TOML"}},
	{name: "byte that is no character", old: `title = "Coldest shelf"`, new: "title = \"▸\xff\"", want: []string{"title: not valid TOML"}},
	{name: "duplicate key", old: "beta = 0.4", new: "beta = 0.4\n▸beta = 0.5", want: []string{"bath.beta: set twice: it stands in line 7"}},
	{name: "duplicate table", old: "[trajectory]", new: "[▸lattice]\n[trajectory]", want: []string{"lattice: set twice: it stands in line 2"}},
	{name: "duplicate in an inline table", old: "bath = {}", new: "bath = {beta = 0.4, ▸beta = 0.5}",
		from: "bath = {}\n[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"ising\"\n", want: []string{"bath.beta: set twice"}},
	{name: "dotted key into a finished table", old: "[lattice]", new: "lattice.size = [4]\n[▸lattice]", want: []string{"lattice: set twice"}},
	{name: "integer too large", old: "[trajectory]", new: "[trajectory]\nseed = ▸9223372036854775808", want: []string{"trajectory.seed: not between -2^63 and 2^63 - 1"}},
	{name: "number too large", old: "beta = 0.4", new: "beta = ▸1e999", want: []string{"bath.beta: beyond the largest number"}},
}

var wrongKeys = []wrong{
	{name: "misspelt", old: "beta = 0.4", new: "▸betta = 0.4", want: []string{"bath.betta: did you mean beta?"}},
	{name: "letter case", old: "beta = 0.4", new: "▸Beta = 0.4", want: []string{"bath.Beta: is written beta: letter case counts"}},
	{name: "letter case of a table", old: "[bath]", new: "[▸Bath]", want: []string{"Bath: is written bath"}},
	{name: "far from any", old: "beta = 0.4", new: "beta = 0.4\n▸colour = 1", want: []string{"bath.colour: is not a key of [bath], which takes beta, law, rate"}},
	{name: "in the wrong table", old: "size = [8, 8]", new: "size = [8, 8]\n▸seed = 3", want: []string{"lattice.seed: belongs in [hamiltonian.disorder] or [trajectory]"}},
	{name: "several at once", old: "beta = 0.4\n[trajectory]\n", new: "▸betta = 0.4\n[trajectory]\n▸spam = 1\n▸Seed = 3\n",
		want: []string{"bath.betta: beta", "trajectory.spam: did you mean span?", "trajectory.Seed: is written seed"}},
	{name: "of another model", old: `model = "ising"`, new: "model = \"ising\"\n▸plaquette = 2.0", want: []string{"hamiltonian.plaquette: the model ising has no plaquette; toric-code and planar-code have it"}},
	{name: "of a custom model", old: `model = "ising"`, new: "model = \"ising\"\n▸levels = 2", want: []string{"hamiltonian.levels: the model ising has no levels; custom, potts, clock, toric-code and planar-code have it"}},
	{name: "coupling of a custom model", from: spelt, old: "sites_per_cell = 2", new: "sites_per_cell = 2\n▸coupling = 2", want: []string{"hamiltonian.coupling: [[hamiltonian.family]]"}},
	{name: "unknown model", old: `"ising"`, new: `▸"isling"`, want: []string{`hamiltonian.model: write "ising"`}},
	{name: "model that is not there", old: `"ising"`, new: `▸"heisenberg"`, want: []string{"hamiltonian.model: this version has ising"}},
	{name: "model of the wrong type", old: `"ising"`, new: `▸["ising"]`, want: []string{"hamiltonian.model: takes a name, not a list"}},
	{name: "no model", old: "[hamiltonian]\nmodel = \"ising\"", new: "[▸hamiltonian]", want: []string{"hamiltonian.model: is missing"}},
	{name: "table as a key", old: "[lattice]\nsize = [8, 8]", new: "lattice = ▸3", want: []string{"lattice: is the table [lattice], not 3"}},
	{name: "repeated table once", old: "[trajectory]", new: "[▸observable]\nkind = \"energy\"\n[trajectory]", want: []string{"observable: is written [[observable]]"}},
	{name: "single table repeated", old: "[bath]", new: "[[▸bath]]", want: []string{"bath: is written [bath], once"}},
}

var wrongValues = []wrong{
	{name: "title of two lines", old: `"Coldest shelf"`, new: `▸"Coldest\nshelf"`, want: []string{"title: is more than one line of text"}},
	{name: "string for a number", old: "beta = 0.4", new: `beta = ▸"0.4"`, want: []string{"bath.beta: takes a number, not a string: leave out the quotes"}},
	{name: "word for a number", old: "beta = 0.4", new: `beta = ▸"cold"`, want: []string{"bath.beta: takes a number, not \"cold\""}},
	{name: "number for a word", old: "[trajectory]", new: "[trajectory]\nstart = ▸1", want: []string{"trajectory.start: takes a word, not 1"}},
	{name: "date for a number", old: "beta = 0.4", new: "beta = ▸2026-12-01", want: []string{"bath.beta: takes a number, not 2026-12-01"}},
	{name: "list for a number", old: "beta = 0.4", new: "beta = ▸[0.4, 0.5]", want: []string{"bath.beta: takes a number; lists of values belong in [scan]"}},
	{name: "float for an integer", old: "[trajectory]", new: "[trajectory]\ncount = ▸16.0", want: []string{"trajectory.count: write 16"}},
	{name: "fraction for an integer", old: "size = [8, 8]", new: "size = [8, ▸8.5]", want: []string{"lattice.size: takes an integer, not 8.5"}},
	{name: "one length", old: "size = [8, 8]", new: "size = ▸8", want: []string{"lattice.size: takes a list of integers: write [8]"}},
	{name: "no lengths", old: "size = [8, 8]", new: "size = ▸[]", want: []string{"lattice.size: is an empty list"}},
	{name: "nested lengths", old: "size = [8, 8]", new: "size = [8, ▸[8]]", want: []string{"lattice.size: takes an integer, not a list"}},
	{name: "size 0", old: "size = [8, 8]", new: "size = [8, ▸0]", want: []string{"lattice.size: 0 is out of range; it must be at least 1"}},
	{name: "negative size", old: "size = [8, 8]", new: "size = [▸-8, ▸-1]", want: []string{"lattice.size: -8 is out of range", "lattice.size: -1"}},
	{name: "five axes", old: "size = [8, 8]", new: "size = [2, 2, 2, 2,\n  # one too many\n  ▸2]", want: []string{"lattice.size: has 5 axes; a lattice has 1 to 4"}},
	{name: "too many cells", old: "size = [8, 8]", new: "size = ▸[4611686018427387904, 8]", want: []string{"lattice.size: makes more than 2^40 cells"}},
	{name: "axes that the model lacks", old: "size = [8, 8]", new: "size = ▸[8]", from: swap(base, `"ising"`, `"toric-code"`), want: []string{"lattice.size: has 1 axis; the model toric-code is defined on 2 to"}},
	{name: "boundary", old: "size = [8, 8]", new: "size = [8, 8]\nboundary = ▸\"closed\"", want: []string{"lattice.boundary: \"closed\" is not known; it must be periodic or open"}},
	{name: "boundary in upper case", old: "size = [8, 8]", new: "size = [8, 8]\nboundary = [\"open\", ▸\"Periodic\"]", want: []string{"lattice.boundary: write \"periodic\""}},
	{name: "too few boundaries", old: "size = [8, 8]", new: "size = [8, 8]\nboundary = ▸[\"open\"]", want: []string{"lattice.boundary: has 1 word for 2 axes"}},
	{name: "no size", old: "[lattice]\nsize = [8, 8]", new: "[▸lattice]", want: []string{"lattice.size: is missing"}},
	{name: "negative beta", old: "beta = 0.4", new: "beta = ▸-0.4", want: []string{"bath.beta: -0.4 is out of range; it must be at least 0"}},
	{name: "beta not a number", old: "beta = 0.4", new: "beta = ▸nan", want: []string{"bath.beta: nan is not a finite number; it must be at least 0"}},
	{name: "infinite beta", old: "beta = 0.4", new: "beta = ▸inf", want: []string{"bath.beta: inf is not a finite number"}},
	{name: "no beta", old: "[bath]\nbeta = 0.4", new: "[▸bath]", want: []string{"bath.beta: is missing: write the inverse temperature"}},
	{name: "no bath", old: "[bath]\nbeta = 0.4\n", new: "", want: []string{"bath.beta: is missing"}},
	{name: "infinite coupling", old: `model = "ising"`, new: "model = \"ising\"\ncoupling = ▸-inf", want: []string{"hamiltonian.coupling: -inf is not a finite number"}},
	{name: "count 0", old: "[trajectory]", new: "[trajectory]\ncount = ▸0", want: []string{"trajectory.count: 0 is out of range; it must be from 1 to 1000000000"}},
	{name: "negative seed", old: "[trajectory]", new: "[trajectory]\nseed = ▸-1", want: []string{"trajectory.seed: -1 is out of range; it must be 0 to 2^63 - 1"}},
	{name: "engine in other words", old: "[trajectory]", new: "[trajectory]\nengine = ▸\"tile\"", want: []string{"trajectory.engine: \"tile\" is not known: write \"tiles\""}},
	{name: "equilibrium start", old: "[trajectory]", new: "[trajectory]\nstart = ▸\"equilibrium\"", want: []string{"trajectory.start: \"equilibrium\" is not supported; this version has reference"}},
	{name: "spins that are not there", old: "beta = 0.4", new: "beta = 0.4\n[trajectory]\nstart = ▸\"up\"", from: spelt, want: []string{"trajectory.start: \"up\" needs spins"}},
}

const starHead = "[[hamiltonian.family]]\nname = \"star\"\n"

var wrongHamiltonians = []wrong{
	{name: "polynomial", from: spelt, old: `"1 + y"`, new: `"1 ▸/ y"`, want: []string{"hamiltonian.family.z: is not a polynomial"}},
	{name: "polynomial in an escaped string", from: spelt, old: `"1 + y"`, new: `"\u0031 + ▸q"`, want: []string{"hamiltonian.family.z: is not a polynomial"}},
	{name: "polynomial in a literal string", from: spelt, old: `"1 + y"`, new: `'1 + ▸Y'`, want: []string{"hamiltonian.family.z: is not a polynomial"}},
	{name: "polynomial in a long string", from: spelt, old: `"1 + y"`, new: "\"\"\"\n1 + \\\n   y + ▸?\"\"\"", want: []string{"hamiltonian.family.z: is not a polynomial"}},
	{name: "axis that the lattice lacks", from: spelt, old: `"1 + y"`, new: `"1 + ▸z"`, want: []string{"hamiltonian.family.z: is not a polynomial"}},
	{name: "polynomials for each site", from: spelt, old: `["1 + y", "1 + x"]`, new: `▸["1 + y"]`, want: []string{"hamiltonian.family.z: has 1 polynomial; the cell has 2 sites"}},
	{name: "bare polynomial", from: spelt, old: `["1 + y", "1 + x"]`, new: `▸"1 + y"`, want: []string{"hamiltonian.family.z: takes a list of polynomials: write [\"1 + y\"]"}},
	{name: "identity", from: spelt, old: starHead + `x = ["1 + x^-1", "1 + y^-1"]`, new: "[[▸hamiltonian.family]]\nname = \"star\"\n" + `x = ["0", "1 + 1"]`, want: []string{"hamiltonian.family: is the identity"}},
	{name: "nothing", from: spelt, old: starHead + `x = ["1 + x^-1", "1 + y^-1"]`, new: "[[▸hamiltonian.family]]\nname = \"star\"\n", want: []string{"hamiltonian.family.z: is missing"}},
	{name: "no name", from: spelt, old: starHead, new: "[[▸hamiltonian.family]]\n", want: []string{"hamiltonian.family.name: is missing"}},
	{name: "name twice", from: spelt, old: `name = "loop"`, new: `name = ▸"star"`, want: []string{"hamiltonian.tracked.name: \"star\" is the name of another operator, in line 10"}},
	{name: "not a name", from: spelt, old: `name = "loop"`, new: `name = ▸"loop x"`, want: []string{"hamiltonian.tracked.name: is not a name"}},
	{name: "group like an operator", from: spelt, old: `name = "star"`, new: "name = \"star\"\ngroup = ▸\"loop\"", want: []string{"hamiltonian.family.group: \"loop\" is the name of an operator"}},
	{name: "line with energy", from: spelt, old: "[[hamiltonian.family]]\nname = \"plaquette\"\n" + `z = ["1 + y", "1 + x"]`, new: "[[▸hamiltonian.family]]\nname = \"plaquette\"\n" + `z = ["line x", "0"]`, want: []string{"hamiltonian.family: runs along whole axes"}},
	{name: "two extents", from: spelt, old: `z = ["line x", "0"]`, new: `z = ["line x", ▸"line y"]`, want: []string{"hamiltonian.tracked.z: runs along other axes"}},
	{name: "seventeen levels", from: spelt, old: "sites_per_cell = 2", new: "sites_per_cell = 2\nlevels = ▸17", want: []string{"hamiltonian.levels: 17 is out of range; it must be from 2 to 16"}},
	{name: "families that do not commute", from: spelt, old: `name = "star"` + "\n" + `x = ["1 + x^-1", "1 + y^-1"]`, new: `name = ▸"star"` + "\n" + `x = ["1 + x^-1", "1 + y"]`, want: []string{"hamiltonian.family: the families plaquette and star do not commute: see star moved by [0, -1] from plaquette"}},
	{name: "cut terms that do not commute", from: swap(spelt, "size = [8, 8]", "size = [8, 8]\nboundary = \"open\""), old: starHead + `x = ["1 + x^-1", "1 + y^-1"]` + "\n[[hamiltonian.tracked]]\nname = \"loop\"", new: starHead + "cut = \"truncate\"\n" + `x = ["1 + x^-1", "1 + y^-1"]` + "\n[[hamiltonian.tracked]]\nname = ▸\"loop\"", want: []string{"hamiltonian.tracked: does not commute with the family star as cut at an open edge"}},
	{name: "tracked operator that does not commute", from: spelt, old: `name = "loop"` + "\n" + `z = ["line x", "0"]`, new: `name = ▸"loop"` + "\n" + `z = ["1", "0"]`, want: []string{"hamiltonian.tracked: the tracked operator loop does not commute with the family star"}},
	{name: "no families", old: "sites_per_cell = 2", new: "", from: "[lattice]\nsize = [8]\n[▸hamiltonian]\nmodel = \"custom\"\nsites_per_cell = 2\n[bath]\nbeta = 1\n", want: []string{"hamiltonian.family: is missing"}},
	{name: "term that does not fit", from: swap(spelt, "size = [8, 8]", "size = [8, 3]\nboundary = \"open\""), old: "beta = 0.4", new: "beta = 0.4\n[[observable]]\nkind = \"terms\"\nfamily = ▸\"tall\"\n[[hamiltonian.family]]\nname = \"tall\"\nz = [\"1 + y^3\", \"0\"]", want: []string{"observable.family: \"tall\" has no term on this lattice"}},
	{name: "two orders", from: spelt, old: `z = ["line x", "0"]`, new: "z = [\"line x\", \"0\"]\norder = ▸true", want: []string{"hamiltonian.tracked.order: runs along whole axes"}},
}

// swap returns the text with old replaced by new, once.
func swap(text, old, new string) string { return strings.Replace(text, old, new, 1) }

var wrongBaths = []wrong{
	{name: "unknown law", old: "beta = 0.4", new: "beta = 0.4\nlaw = ▸\"glauber\"", want: []string{"bath.law: \"glauber\" is not known; it must be heat-bath, metropolis"}},
	{name: "law in upper case", old: "beta = 0.4", new: "beta = 0.4\nlaw = ▸\"Heat_Bath\"", want: []string{"bath.law: write \"heat-bath\""}},
	{name: "rate 0", old: "beta = 0.4", new: "beta = 0.4\nrate = ▸0", want: []string{"bath.rate: 0 is out of range; it must be above 0"}},
	{name: "power without exponent", old: "[bath]\nbeta = 0.4", new: "[▸bath]\nbeta = 0.4\nlaw = \"power\"", want: []string{"bath.exponent: is missing: a power law needs its p"}},
	{name: "exponent below 1", old: "beta = 0.4", new: "beta = 0.4\nlaw = \"power\"\nexponent = ▸0.5", want: []string{"bath.exponent: must be at least 1"}},
	{name: "power at beta 0", old: "beta = 0.4", new: "beta = ▸0\nlaw = \"ohmic\"", want: []string{"bath.beta: is 0, where a power law has no finite rates"}},
	{name: "power at scanned beta 0", old: "beta = 0.4", new: "law = \"ohmic\"\n[scan]\nbeta = [0.5, ▸0.0]", want: []string{"bath.beta: is 0"}},
	{name: "exponent of ohmic", old: "beta = 0.4", new: "beta = 0.4\nlaw = \"ohmic\"\n▸exponent = 1.0", want: []string{"bath.exponent: is a key of power; the law here is ohmic"}},
	{name: "cutoff of another law", old: "beta = 0.4", new: "beta = 0.4\n▸cutoff = 1.0", want: []string{"bath.cutoff: is a key of power and ohmic; the law here is heat-bath"}},
	{name: "table without energies", old: "[bath]\nbeta = 0.4", new: "[▸bath]\nbeta = 0.4\nlaw = \"table\"\nrates = [1.0]", want: []string{"bath.energies: is missing"}},
	{name: "table that does not increase", old: "beta = 0.4", new: "beta = 0.4\nlaw = \"table\"\nenergies = [0, 8, ▸4]\nrates = [1, 2, 3]", want: []string{"bath.energies: 4 does not follow 8: they must increase"}},
	{name: "table of unequal lengths", old: "beta = 0.4", new: "beta = 0.4\nlaw = \"table\"\nenergies = [0, 4, 8]\nrates = ▸[1, 2]", want: []string{"bath.rates: has 2 rates for 3 energies"}},
	{name: "table that lacks an energy", old: "beta = 0.4", new: "beta = 0.4\nlaw = \"table\"\nenergies = ▸[0, 4]\nrates = [1, 2]", want: []string{"bath.energies: the table gives no rate for the energy 8"}},
	{name: "rates of a table that are all 0", old: "beta = 0.4", new: "beta = 0.4\nlaw = ▸\"table\"\nenergies = [0, 4, 8]\nrates = [0, 0, 0]", want: []string{"bath.law: nothing ever happens"}},
	{name: "unknown bath operator", old: "beta = 0.4", new: "beta = 0.4\ncouples = [\"X\", ▸\"W\"]", want: []string{"bath.couples: \"W\" is not known; it must be X, Y or Z"}},
	{name: "lower-case bath operator", old: "beta = 0.4", new: "beta = 0.4\ncouples = [▸\"x\"]", want: []string{"bath.couples: write \"X\""}},
	{name: "bath operator on two sites", old: "beta = 0.4", new: "beta = 0.4\n[[bath.operator]]\non = ▸\"XX\"", want: []string{"bath.operator.on: \"XX\" is not supported; this version has X, Y or Z"}},
	{name: "bath operator twice", old: "beta = 0.4", new: "beta = 0.4\ncouples = [\"X\", ▸\"X\"]", want: []string{"bath.couples: names X twice"}},
	{name: "both ways at once", old: "beta = 0.4", new: "beta = 0.4\n▸couples = [\"X\"]\n[[bath.operator]]\non = \"X\"", want: []string{"bath.couples: stands beside [[bath.operator]] tables"}},
	{name: "law of no operator", old: "beta = 0.4", new: "beta = 0.4\n▸exponent = 2\n[[bath.operator]]\non = \"X\"", want: []string{"bath.exponent: is a key of power; no bath operator here"}},
	{name: "site that is not there", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[[bath.operator]]\non = \"X\"\nsites = [1, ▸2]", want: []string{"bath.operator.sites: the cell has no site 2; its sites are 0 to 1"}},
	{name: "operator without what it is", old: "beta = 0.4", new: "beta = 0.4\n[[▸bath.operator]]\nrate = 2", want: []string{"bath.operator.on: is missing: write X, Y or Z"}},
	{name: "nothing happens", old: "beta = 0.4", new: "beta = 0.4\ncouples = ▸[\"Z\"]", want: []string{"bath.couples: no bath operator changes any term"}},
}

var wrongObservables = []wrong{
	{name: "no kind", old: "[trajectory]", new: "[[▸observable]]\n[trajectory]", want: []string{"observable.kind: is missing"}},
	{name: "unknown kind", old: "[trajectory]", new: "[[observable]]\nkind = ▸\"magnetisation\"\n[trajectory]", want: []string{"observable.kind: write \"magnetization\""}},
	{name: "unknown family", old: "[trajectory]", new: "[[observable]]\nkind = \"terms\"\nfamily = ▸\"plaquette\"\n[trajectory]", want: []string{"observable.family: there is no \"plaquette\"; the Hamiltonian has families bond-x, bond-y; groups bond; tracked operators of single cells spin"}},
	{name: "misspelt family", old: "[trajectory]", new: "[[observable]]\nkind = \"terms\"\nfamily = ▸\"Bond\"\n[trajectory]", want: []string{"observable.family: did you mean \"bond\"?"}},
	{name: "family without coupling", old: "[trajectory]", new: "[[observable]]\nkind = \"terms\"\nfamily = ▸\"field\"\n[trajectory]", want: []string{"observable.family: \"field\" has coupling 0 here"}},
	{name: "family that runs across", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[[observable]]\nkind = \"terms\"\nfamily = ▸\"loop\"", want: []string{"observable.family: observe it with kind = \"operator\", tracked = \"loop\""}},
	{name: "unknown tracked operator", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[[observable]]\nkind = \"operator\"\ntracked = ▸\"loops\"", want: []string{"observable.tracked: did you mean \"loop\"?"}},
	{name: "tracked operator of single cells", old: "[trajectory]", new: "[[observable]]\nkind = \"operator\"\ntracked = ▸\"spin\"\n[trajectory]", want: []string{"observable.tracked: \"spin\" has one term per cell"}},
	{name: "no magnetization", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[[observable]]\nkind = ▸\"magnetization\"", want: []string{"observable.kind: this Hamiltonian has no magnetization; it has families plaquette, star"}},
	{name: "family of a scalar", old: "[trajectory]", new: "[[observable]]\nkind = \"energy\"\n▸family = \"bond\"\n[trajectory]", want: []string{"observable.family: is not a key of the kind energy"}},
	{name: "no family", old: "[trajectory]", new: "[[▸observable]]\nkind = \"local\"\n[trajectory]", want: []string{"observable.family: is missing"}},
	{name: "no wavevector", old: "[trajectory]", new: "[[▸observable]]\nkind = \"fourier\"\nfamily = \"spin\"\n[trajectory]", want: []string{"observable.wavevector: is missing"}},
	{name: "wavevector of other axes", old: "[trajectory]", new: "[[observable]]\nkind = \"fourier\"\nfamily = \"spin\"\nwavevector = ▸[1]\n[trajectory]", want: []string{"observable.wavevector: has 1 component on a lattice with 2 axes"}},
	{name: "wavevector that aliases", old: "[trajectory]", new: "[[observable]]\nkind = \"fourier\"\nfamily = \"spin\"\nwavevector = [4, ▸-5]\n[trajectory]", want: []string{"observable.wavevector: -5 is more than half of the 8 cells"}},
	{name: "wavevector 0", old: "[trajectory]", new: "[[observable]]\nkind = \"fourier\"\nfamily = \"spin\"\nwavevector = ▸[0, 0]\n[trajectory]", want: []string{"observable.wavevector: is 0: that is the plain sum"}},
	{name: "single terms that differ", from: swap(base, "size = [8, 8]", "size = [8, 6]"), old: "[trajectory]", new: "[[observable]]\nkind = \"local\"\nfamily = ▸\"bond\"\n[trajectory]", want: []string{"observable.family: may have different means on this lattice: ask for one of bond-x or bond-y"}},
	{name: "the same label", old: "[trajectory]", new: "[[observable]]\nkind = \"energy\"\n[[▸observable]]\nkind = \"energy\"\n[trajectory]", want: []string{"observable.name: \"energy\" is the label of another observable, in line 8"}},
	{name: "the same name", old: "[trajectory]", new: "[[observable]]\nkind = \"energy\"\n[[observable]]\nkind = \"magnetization\"\nname = ▸\"energy\"\n[trajectory]", want: []string{"observable.name: \"energy\" is the label"}},
	{name: "pair of unknown labels", old: "[trajectory]", new: "[[pair]]\nof = [\"energy\", ▸\"spin\"]\n[trajectory]", want: []string{"pair.of: no observable is labelled \"spin\"; there are energy and magnetization"}},
	{name: "pair of one", old: "[trajectory]", new: "[[pair]]\nof = ▸[\"energy\"]\n[trajectory]", want: []string{"pair.of: has 1 label; a pair has 2"}},
	{name: "pair with itself", old: "[trajectory]", new: "[[pair]]\nof = ▸[\"energy\", \"energy\"]\n[trajectory]", want: []string{"pair.of: names energy twice"}},
	{name: "pair of many components", old: "[trajectory]", new: "[[observable]]\nkind = \"energy\"\n[[observable]]\nkind = \"local\"\nfamily = \"spin\"\n[[pair]]\nof = [\"energy\", ▸\"local-spin\"]\n[trajectory]", want: []string{"pair.of: local-spin has several components"}},
	{name: "pair that anticommutes", from: swap(crossed, "COUPLES", `couples = ["X", "Z"]`), old: "[trajectory]", new: "[[pair]]\nof = ▸[\"operator-loop\", \"operator-dual\"]\n[trajectory]", want: []string{"pair.of: operator-loop and operator-dual anticommute"}},
	{name: "covariance of nothing", old: "[trajectory]", new: "[▸covariance]\n[trajectory]", want: []string{"covariance.of: is missing"}},
	{name: "covariance of an unknown family", old: "[trajectory]", new: "[covariance]\nof = ▸\"spins\"\n[trajectory]", want: []string{"covariance.of: did you mean \"spin\"?"}},
	{name: "covariance of a line", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[covariance]\nof = ▸\"loop\"", want: []string{"covariance.of: runs across the lattice"}},
	{name: "limit 0", old: "[trajectory]", new: "[covariance]\nof = \"spin\"\nlimit = ▸0\n[trajectory]", want: []string{"covariance.limit: must be from 1 to 1024"}},
}

// crossed is the toric code with two loops that cross once.
const crossed = `[lattice]
size = [3, 3]
[hamiltonian]
model = "custom"
sites_per_cell = 2
[[hamiltonian.family]]
name = "plaquette"
z = ["1 + y", "1 + x"]
[[hamiltonian.tracked]]
name = "loop"
z = ["line x", "0"]
[[hamiltonian.tracked]]
name = "dual"
x = ["line y", "0"]
[bath]
beta = 0.4
COUPLES
[[observable]]
kind = "operator"
tracked = "loop"
[[observable]]
kind = "operator"
tracked = "dual"
[trajectory]
span = 100.0
step = 0.5
`

var wrongTimes = []wrong{
	{name: "step above span", old: "step = 0.5", new: "step = ▸200.0", want: []string{"trajectory.step: the time between samples, 200, is longer than the span, 100"}},
	{name: "too few samples", old: "step = 0.5", new: "step = ▸5", want: []string{"trajectory.step: span / step = 100 / 5 gives 20 samples; at least 64 are needed"}},
	{name: "too few samples at the default step", old: "span = 100.0\nstep = 0.5", new: "span = ▸10", want: []string{"trajectory.span: gives 38 samples"}},
	{name: "too many samples", old: "step = 0.5", new: "step = ▸1e-30", want: []string{"trajectory.step: could not be told apart"}},
	{name: "span 0", old: "span = 100.0", new: "span = ▸0", want: []string{"trajectory.span: must be above 0"}},
	{name: "negative settle", old: "settle = 10.0", new: "settle = ▸-1", want: []string{"trajectory.settle: must be at least 0"}},
	{name: "infinite span", old: "span = 100.0", new: "span = ▸+inf", want: []string{"trajectory.span: +inf is not a finite number"}},
	{name: "snapshots further apart than the span", old: "[trajectory]", new: "[covariance]\nof = \"spin\"\nevery = ▸200\n[trajectory]", want: []string{"covariance.every: longer than the span, 100"}},
	{name: "snapshots between samples", old: "[trajectory]", new: "[covariance]\nof = \"spin\"\nevery = ▸0.1\n[trajectory]", want: []string{"covariance.every: must not be below the step, 0.5"}},
}

var wrongScans = []wrong{
	{name: "unknown parameter", old: "[trajectory]", new: "[scan]\n▸temperature = [1.0]\n[trajectory]", want: []string{"scan.temperature: cannot be scanned; a number of the study can, by its dotted name: "}},
	{name: "misspelt parameter", old: "beta = 0.4", new: "[scan]\n▸bata = [1.0]\n", want: []string{"scan.bata: did you mean beta?"}},
	{name: "parameter without its table", old: "[trajectory]", new: "[scan]\n▸field = [1.0]\n[trajectory]", want: []string{"scan.field: did you mean \"hamiltonian.field\"?"}},
	{name: "parameter of another model", old: "[trajectory]", new: "[scan]\n▸\"hamiltonian.star\" = [1.0]\n[trajectory]", want: []string{"scan.hamiltonian.star: the model ising has no star; toric-code and planar-code have it"}},
	{name: "word", old: "[trajectory]", new: "[scan]\nbath.▸law = [\"ohmic\"]\n[trajectory]", want: []string{"scan.bath.law: is not a number that a scan can vary"}},
	{name: "one wrong among others", old: "beta = 0.4", new: "[scan]\nbeta = [0.3, 0.4]\n▸colour = [1]\n", want: []string{"scan.colour: cannot be scanned"}},
	{name: "levels", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[scan]\n▸\"hamiltonian.levels\" = [2, 3]", want: []string{"scan.hamiltonian.levels: is not a number that a scan can vary"}},
	{name: "no values", old: "[trajectory]", new: "[scan]\nbeta = ▸[]\n[trajectory]", want: []string{"scan.beta: is an empty list of values"}},
	{name: "value of the wrong type", old: "[trajectory]", new: "[scan]\nbeta = [0.1, ▸\"0.2\", ▸[0.3]]\n[trajectory]", want: []string{"scan.beta: leave out the quotes", "scan.beta: takes a number"}},
	{name: "value out of range", old: "[trajectory]", new: "[scan]\nbeta = [0.1, ▸-0.2]\nsize = [4, [4, ▸0]]\n[trajectory]", want: []string{"scan.beta: -0.2 is out of range", "scan.size: 0 is out of range"}},
	{name: "the same value twice", old: "[trajectory]", new: "[scan]\nbeta = [0.30, 0.4, ▸0.3]\n[trajectory]", want: []string{"scan: makes the same point as line 9"}},
	{name: "the same point in two cases", old: "[trajectory]", new: "[[case]]\nbeta = [0.3, 0.4]\n[[▸case]]\nbeta = 0.4\n[trajectory]", want: []string{"case: makes the same point as line 9"}},
	{name: "points that differ in count alone", old: "[trajectory]", new: "[scan]\ncount = [8, ▸16]\n[trajectory]", want: []string{"scan: whatever its count"}},
	{name: "the same parameter twice", old: "[trajectory]", new: "[scan]\nbeta = [0.1]\nbath.▸beta = [0.2]\n[trajectory]", want: []string{"scan.bath.beta: set twice"}},
	{name: "scan beside cases", old: "[trajectory]", new: "[▸scan]\nbeta = [0.1]\n[[case]]\nsize = 4\n[trajectory]", want: []string{"scan: stands beside [[case]] tables"}},
	{name: "empty case", old: "[trajectory]", new: "[[▸case]]\n[trajectory]", want: []string{"case: is empty"}},
	{name: "case once", old: "[trajectory]", new: "[▸case]\nbeta = 0.3\n[trajectory]", want: []string{"case: is written [[case]]"}},
	{name: "unknown family in a name", from: spelt, old: "beta = 0.4", new: "beta = 0.4\n[scan]\nhamiltonian.family.stars.▸coupling = [1.0, 2.0]", want: []string{"scan.hamiltonian.family.stars.coupling: there is no [[hamiltonian.family]] with name = \"stars\"; there is plaquette and star"}},
	{name: "bath operator that stands twice", old: "beta = 0.4", new: "beta = 0.4\n[[bath.operator]]\non = \"X\"\n[[bath.operator]]\non = \"X\"\n[scan]\n▸\"bath.operator.X.rate\" = [1.0, 2.0]", want: []string{"scan.bath.operator.X.rate: there are 2 [[bath.operator]] with on = \"X\""}},
	{name: "times of no covariance", old: "[trajectory]", new: "[scan]\n\"covariance.every\" = [1.0, 2.0]\n[trajectory]", want: []string{"covariance.of: needs [covariance]"}},
	{name: "too many points", old: "[trajectory]", new: "[▸scan]\nbeta = [" + many(200) + "]\n\"trajectory.seed\" = [" + many(200) + "]\n[trajectory]", want: []string{"scan: makes more than 10000 points"}},
	{name: "one length for an unknown number of axes", old: "size = [8, 8]", new: "[scan]\nsize = [▸8, [8, 8]]\n", want: []string{"lattice.size: how many there are is not said"}},
	{name: "step above the span of one case", old: "[trajectory]", new: "[[case]]\nspan = [100.0, ▸0.1]\n[trajectory]", want: []string{"trajectory.span: longer than the span, 0.1"}},
}

// many lists n integers.
func many(n int) string {
	words := make([]string, n)
	for i := range words {
		words[i] = strconv.Itoa(i)
	}
	return strings.Join(words, ", ")
}
