package configs

import (
	"fmt"
	"strings"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/models"
)

// Points are checked on a shortened lattice; the largest rate found there is
// that of the whole one, for every model, boundary and parity.
func TestShortenedLatticeHasTheSameRates(t *testing.T) {
	check := func(name, text string) {
		s, err := Decode("shelf", "", []byte(text))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			return
		}
		p := &s.Points[0]
		g, err := p.Generator()
		if err != nil {
			t.Errorf("%s: %v", name, err)
			return
		}
		if got := g.MaxRate(); got != p.MaxRate {
			t.Errorf("%s: largest rate %v, on the shortened lattice %v", name, got, p.MaxRate)
		}
		if short := shortened(p.Spec); p.Spec.Lattice.Axes < 4 && short == p.Spec.Lattice {
			t.Errorf("%s: the lattice is not shortened", name)
		}
	}
	sizes := map[int]string{1: "[40]", 2: "[20, 21]", 3: "[12, 12, 13]"}
	for _, m := range models.All() {
		for axes, size := range sizes {
			if axes < m.MinAxes || axes > m.MaxAxes {
				continue
			}
			for _, boundary := range []string{"periodic", "open"} {
				if m.Open && boundary != "open" {
					continue
				}
				check(fmt.Sprint(m.Name, size, boundary), fmt.Sprintf("[lattice]\nsize = %s\nboundary = %q\n[hamiltonian]\nmodel = %q\n[bath]\nbeta = 0.7\ncouples = [\"X\", \"Y\", \"Z\"]\n", size, boundary, m.Name))
			}
		}
	}
	for _, boundary := range []string{"periodic", "open"} {
		for _, cut := range []string{"drop", "truncate"} {
			check("custom "+boundary+cut, fmt.Sprintf("[lattice]\nsize = [40, 30]\nboundary = %q\n[hamiltonian]\nmodel = \"custom\"\n[[hamiltonian.family]]\nname = \"far\"\ncut = %q\nz = [\"1 + x^2 + x^-1*y^3 + x^2*y\"]\ncoupling = 0.3\n[bath]\nbeta = 0.7\n", boundary, cut))
		}
	}
}

func TestLargeLatticesLoadAtOnce(t *testing.T) {
	for _, text := range []string{
		"[lattice]\nsize = [1048576, 1048576]\n[hamiltonian]\nmodel = \"ising\"\n[bath]\nbeta = 1\n",
		"[lattice]\nsize = [1024, 1024, 1024, 1024]\nboundary = \"open\"\n[hamiltonian]\nmodel = \"ising\"\n[bath]\nbeta = 1\n",
	} {
		decoded(t, text)
	}
	_, err := Decode("shelf", "", []byte("[lattice]\nsize = [1000, 1000, 1000]\n[hamiltonian]\nmodel = \"custom\"\n[[hamiltonian.family]]\nname = \"far\"\nz = [\"1 + x^60 + y^60 + z^60\"]\n[bath]\nbeta = 1\n"))
	if err == nil || !strings.Contains(err.Error(), "the operators reach too far") {
		t.Errorf("%v", err)
	}
}

// Lines alone, without a term of any energy, are a Hamiltonian too.
func TestNoEnergyAtAll(t *testing.T) {
	p := only(t, swap(swap(base, `"ising"`, `"toric-code"`), "[bath]", "coupling = 0.0\n[bath]"))
	if p.MaxRate != 0.5 || len(p.Observables) != 3 {
		t.Errorf("largest rate %v, observables %v", p.MaxRate, p.Observables)
	}
	if _, err := kinetic.Compile(p.Spec); err != nil {
		t.Error(err)
	}
}
