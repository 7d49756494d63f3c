package ui

import (
	"fmt"
	"os"
	"path/filepath"

	"github.com/BurntSushi/toml"
	"github.com/adrg/xdg"
	tea "github.com/charmbracelet/bubbletea"
	"github.com/google/renameio/v2"
)

// settings are what the interface remembers from one run to the next.
type settings struct {
	MouseOff bool `toml:"mouse_off"`
}

func settingsFile() string { return filepath.Join(xdg.ConfigHome, "tallystick", "settings.toml") }

// readSettings reads what is remembered. What cannot be read is as if it were not there: settings are a
// comfort.
func readSettings() settings {
	var s settings
	if _, err := toml.DecodeFile(settingsFile(), &s); err != nil {
		return settings{}
	}
	return s
}

// settingsKeptMsg: the settings are on disk, or are not.
type settingsKeptMsg struct {
	settings settings
	err      error
}

// mouseWords say what the mouse does; what is so beside that stands after on and off.
func mouseWords(on bool, beside string) string {
	if on {
		return "mouse on" + beside + ": the wheel moves, a click chooses"
	}
	return "mouse off" + beside + ": the terminal marks text as usual"
}

func keepSettingsCmd(s settings) tea.Cmd {
	return guarded(func() tea.Msg {
		path := settingsFile()
		if err := os.MkdirAll(filepath.Dir(path), 0o700); err != nil {
			return settingsKeptMsg{s, err}
		}
		text := fmt.Sprintf("# Written by tallystick. The key m changes it.\nmouse_off = %t\n", s.MouseOff)
		return settingsKeptMsg{s, renameio.WriteFile(path, []byte(text), 0o600, renameio.WithTempDir(filepath.Dir(path)))}
	})
}
