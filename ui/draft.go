package ui

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"github.com/adrg/xdg"
	"github.com/google/renameio/v2"

	"example.org/tallystick/campaigns"
)

// A draft is a plan that was not saved when the program ended. It lies in the state folder, never in
// the campaign's, and is offered the next time the campaign is opened.
type draft struct {
	Key     string               `json:"campaign"` // tells campaigns apart
	Session string               `json:"session"`
	Run     int64                `json:"run"` // tells runs of the program apart, so that none writes over another's draft
	KeptAt  time.Time            `json:"kept_at"`
	Plan    *campaigns.SavedPlan `json:"plan"`
}

func draftFolder(key string) string {
	sum := sha256.Sum256([]byte(key))
	return filepath.Join(xdg.StateHome, "tallystick", "drafts", hex.EncodeToString(sum[:8]))
}

func (d draft) path() string {
	sum := sha256.Sum256([]byte(d.Session))
	return filepath.Join(draftFolder(d.Key), fmt.Sprintf("%x-%x.json", sum[:8], d.Run))
}

func (d draft) keep() error {
	if err := os.MkdirAll(draftFolder(d.Key), 0o700); err != nil {
		return err
	}
	data, err := json.MarshalIndent(d, "", "  ")
	if err != nil {
		return err
	}
	return renameio.WriteFile(d.path(), append(data, '\n'), 0o600, renameio.WithTempDir(draftFolder(d.Key)))
}

func (d draft) remove() error {
	if err := os.Remove(d.path()); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return nil
}

// findDrafts reads what was left behind for a campaign. What cannot be read is left where it is.
func findDrafts(key string) []draft {
	files, err := filepath.Glob(filepath.Join(draftFolder(key), "*.json"))
	if err != nil {
		return nil
	}
	var found []draft
	for _, f := range files {
		data, err := os.ReadFile(f)
		var d draft
		if err != nil || json.Unmarshal(data, &d) != nil || d.Key != key || d.Plan == nil {
			continue
		}
		found = append(found, d)
	}
	return found
}

// campaignKey tells this campaign from others in the state folder.
func (m *model) campaignKey() string {
	name := m.world.folder.Name()
	if !m.world.folder.Demo() {
		if abs, err := filepath.Abs(name); err == nil {
			return abs
		}
	}
	return name
}

// draftOf is the draft of what is on a desk.
func (m *model) draftOf(d *desk) draft {
	s := d.shown()
	return draft{
		Key: m.campaignKey(), Session: d.session.Name, Run: m.run, KeptAt: m.machine().UTC(),
		Plan: d.preparedWith(s.bars).Saved(s.plan, m.world.provenFor(d, s), m.cfg.Version),
	}
}

// keepDrafts writes a draft of everything unsaved, and says where, or why not.
func (m *model) keepDrafts() []string {
	var said []string
	for _, d := range m.world.unsaved() {
		kept := m.draftOf(d)
		if err := kept.keep(); err != nil {
			said = append(said, fmt.Sprintf("the unsaved plan of %s could not be kept: %v", d.session.Name, err))
			continue
		}
		for _, old := range m.drafts[d.session.Name] {
			if old.Run != m.run {
				_ = old.remove() // restored, and part of the one just kept
			}
		}
		said = append(said, fmt.Sprintf("the unsaved plan of %s is kept and will be offered at the next start", d.session.Name))
	}
	return said
}
