package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
)

func TestClassesSigns(t *testing.T) { kinetictest.SuiteSigns(t, kinetic.NewClasses) }

func TestLanesSigns(t *testing.T) { kinetictest.SuiteSigns(t, kinetic.NewLanes) }

func TestTilesSigns(t *testing.T) { kinetictest.SuiteSigns(t, kinetic.NewTiles) }

func TestCompositionCouplings(t *testing.T) {
	kinetictest.SuiteCouplings(t, kinetic.NewComposition)
}
