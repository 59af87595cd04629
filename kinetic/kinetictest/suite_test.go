package kinetictest_test

import (
	"testing"

	"sojourn/kinetic/kinetictest"
)

func TestObvious(t *testing.T) { kinetictest.Suite(t, kinetictest.NewObvious) }

func TestObviousCouplings(t *testing.T) { kinetictest.SuiteCouplings(t, kinetictest.NewObvious) }
