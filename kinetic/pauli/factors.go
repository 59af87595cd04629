package pauli

import "sort"

func sortFactors(f []Factor) {
	sort.Slice(f, func(i, j int) bool {
		if f[i].Exp != f[j].Exp {
			return f[i].Exp.Less(f[j].Exp)
		}
		return f[i].Site < f[j].Site
	})
}
