package campaigns

import (
	_ "embed"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"strings"
	"time"
)

// starterText is the campaign that WriteStarter writes, with NIGHT, START and END for its session.
//
//go:embed starter.toml
var starterText string

// WriteStarter writes a small campaign.toml with comments into a folder, to be made into one's own. Its
// session is the second night after now, so that it lies ahead. The logbook begins with the first entry.
// A campaign.toml that is there already is never overwritten.
func WriteStarter(dir string, now time.Time) error {
	night := now.UTC().AddDate(0, 0, 2).Truncate(24 * time.Hour).Add(19 * time.Hour)
	text := strings.NewReplacer(
		"NIGHT", night.Format("2006-01-02")+" night",
		"START", night.Format(time.RFC3339),
		"END", night.Add(8*time.Hour).Format(time.RFC3339),
	).Replace(starterText)
	to := disk{dir}
	if err := makeFolder(dir); err != nil {
		return err
	}
	unlock, err := to.lock()
	if err != nil {
		return err
	}
	defer unlock()
	file := to.path(CampaignFile)
	if _, err := os.Lstat(file); err == nil {
		return fmt.Errorf("%s: found a file that is there already; accepted: a folder without one", file)
	} else if !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return to.replace(CampaignFile, []byte(text))
}
