package radiometer

import (
	"testing"

	"example.org/tallystick/internal/outside"
)

func TestMain(m *testing.M) {
	outside.Main(m, nil)
}
