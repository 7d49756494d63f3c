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

// WriteStarter writes a small campaign with comments into a folder, to be made into one's own. Its session
// is the second night after now, so that it lies ahead. It never overwrites anything: when one of its files
// is there already, nothing is written.
func WriteStarter(dir string, now time.Time) error {
	night := now.UTC().AddDate(0, 0, 2).Truncate(24 * time.Hour).Add(19 * time.Hour)
	text := strings.NewReplacer(
		"NIGHT", night.Format("2006-01-02")+" night",
		"START", night.Format(time.RFC3339),
		"END", night.Add(8*time.Hour).Format(time.RFC3339),
	).Replace(starterText)
	files := []struct{ name, text string }{
		{LogbookFile, strings.Join(logbookColumns, ",") + "\r\n"},
		{CampaignFile, text}, // last: it makes the folder a campaign
	}
	to := disk{dir}
	if err := makeFolder(dir); err != nil {
		return err
	}
	unlock, err := to.lock()
	if err != nil {
		return err
	}
	defer unlock()
	for _, f := range files {
		_, err := os.Lstat(to.path(f.name))
		if err == nil {
			return fmt.Errorf("%s: found a file that is there already; accepted: a folder without one", to.path(f.name))
		}
		if !errors.Is(err, fs.ErrNotExist) {
			return err
		}
	}
	for _, f := range files {
		if err := to.replace(f.name, []byte(f.text)); err != nil {
			return err
		}
	}
	return nil
}
