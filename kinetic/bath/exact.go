package bath

import (
	"math/big"
	"strconv"
)

func exact(x float64) *big.Rat {
	r, ok := new(big.Rat).SetString(strconv.FormatFloat(x, 'g', -1, 64))
	if !ok {
		panic("bath: not a finite number")
	}
	return r
}
