package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
)

func TestClassesSuite(t *testing.T) { kinetictest.Suite(t, kinetic.NewClasses) }

func TestClassesLevels(t *testing.T) { kinetictest.SuiteLevels(t, kinetic.NewClasses) }
