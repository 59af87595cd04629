package observables

import "sojourn/kinetic/lattice"

// Kind is what an observable measures.
type Kind string

// The kinds.
const (
	Energy        Kind = "energy"        // total energy
	Magnetization Kind = "magnetization" // sum of the spins
	Terms         Kind = "terms"         // sum of the values of a family's terms (or of a group's)
	Local         Kind = "local"         // single terms of a family, averaged over the lattice
	Fourier       Kind = "fourier"       // Fourier amplitude of a family or of local tracked operators
	Operator      Kind = "operator"      // a tracked operator with an extent, averaged over its positions
)

// Observable is one quantity to record, already resolved against a generator.
//
// An observable has one component or many. A scalar (energy, magnetization,
// terms) has one. The others have many (Fourier: real and imaginary part;
// Local: the chosen terms; Operator: the transverse positions): their products
// are summed over components and divided by Norm, which is 1 for Fourier and
// the number of terms or positions for the rest.
//
// With more than two levels tracked operators are complex: their real and their
// imaginary part are components, so that products are Re f^* g, and their sums
// (magnetization, terms) are no scalars.
type Observable struct {
	Name       string
	Kind       Kind
	Families   []int          // indices into Generator.Families (Terms, Local, Fourier, Magnetization)
	Line       int            // index into Generator.Lines (Operator)
	Wavevector lattice.Offset // Fourier: k = 2 pi Wavevector/L along each axis
	Complex    bool           // made of tracked operators of more than two levels
}

// Scalar reports whether the observable is a single number, so that its
// covariance with another scalar means something.
func (o Observable) Scalar() bool {
	return o.Kind == Energy || (o.Kind == Magnetization || o.Kind == Terms) && !o.Complex
}

// amplitude reports whether the observable is one complex number.
func (o Observable) amplitude() bool {
	return o.Kind == Fourier || (o.Kind == Magnetization || o.Kind == Terms) && o.Complex
}
