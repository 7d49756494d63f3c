package radiometer

import (
	"testing"

	"example.org/tallystick/internal/outside"
)

func TestMain(m *testing.M) {
	outside.Main(m, map[string]string{"RAD-030": "errors are by the plain rule W/(S/N), which is RAD-011; the bound of a matched template is not used"})
}
