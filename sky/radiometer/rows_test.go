package radiometer

import (
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestMain(m *testing.M) {
	outside.Main(m, nil)
}
