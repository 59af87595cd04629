package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
)

func TestLanesSuite(t *testing.T) { kinetictest.Suite(t, kinetic.NewLanes) }
