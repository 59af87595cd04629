package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
)

func TestTilesSuite(t *testing.T) {
	kinetictest.Suite(t, kinetic.NewTiles)
}
