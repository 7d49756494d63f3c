package campaigns

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"

	"github.com/BurntSushi/toml"
)

// Format is the version of the campaign files that this program writes and reads.
const Format = 1

// CampaignFile is the file that makes a folder a campaign.
const CampaignFile = "campaign.toml"

// Ends that no campaign comes near, so that a wrong file is refused instead of filling the memory.
const (
	largestFile = 16 << 20 // bytes of one TOML file
	mostFiles   = 10000    // that are included
)

// Load reads the campaign in a folder. Whatever is wrong with its content is reported at once: the
// error is then of type Complaints, in the order of the files and of their lines.
//
// Keys that are left out get the defaults that the fields of Campaign name. An aim without minutes and
// toa_us wants as much as the first of its source's aims that has one of them (conjunction and calibration
// aside); a conjunction wants its whole window, but no more than twelve hours; calibration must say.
func Load(dir string) (*Campaign, error) {
	c, _, err := load(os.DirFS(dir), dir)
	return c, err
}

// LoadFS is Load for any file system; name is what its root is called in messages.
func LoadFS(fsys fs.FS, name string) (*Campaign, error) {
	c, _, err := load(fsys, name)
	return c, err
}

// load also returns the names of the files that were read, campaign.toml first.
func load(fsys fs.FS, name string) (*Campaign, []string, error) {
	l := &loader{fsys: fsys, name: name, campaign: &Campaign{}}
	text, err := readText(fsys, CampaignFile)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil, fmt.Errorf("%s: found no %s; accepted: the folder of a campaign: %w", name, CampaignFile, fs.ErrNotExist)
	}
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", l.called(CampaignFile), err)
	}
	l.main(text)
	if cs := l.report.complaints(); len(cs) > 0 {
		return nil, l.files, cs
	}
	return l.campaign, l.files, nil
}

// A loader holds what is known while the files are read one after the other.
type loader struct {
	fsys     fs.FS
	name     string
	campaign *Campaign
	report   report
	files    []string
	firstAt  map[string]string // where each name was used first, by kind
	unsure   map[string]bool   // kinds of which a name could not be read: others that are not found may be that one
}

// called is what a file is called in messages.
func (l *loader) called(file string) string {
	if l.name == "" {
		return file
	}
	return filepath.Join(l.name, filepath.FromSlash(file))
}

func (l *loader) main(text string) {
	l.firstAt, l.unsure = map[string]string{}, map[string]bool{}
	top := l.open(CampaignFile, text)
	if top == nil {
		// What stands before the fault still tells which files belong to the campaign.
		if top = l.beforeFault(text); top != nil {
			l.include(top.table("campaign", "campaign", false))
		}
		return
	}
	if !top.format(true) {
		return
	}
	c := top.table("campaign", "campaign", true)
	if c != nil {
		l.campaign.Name = c.nameOf("name")
	}
	l.readSites(top)
	l.readReceivers(top)
	l.readSources(top)
	l.readSessions(top)
	top.done(nil)
	l.include(c)
	if len(l.campaign.Sources) == 0 && len(l.report.placed) == 0 {
		top.complain("source", "no sources", "at least one [[source]], here or in an included file", "")
	}
}

// open parses one file into its top table; nil when it is not TOML, which is then its only complaint.
func (l *loader) open(file, text string) *table {
	l.files = append(l.files, file)
	doc := &document{name: l.called(file), order: len(l.files), report: &l.report}
	return parseTOML(doc, text)
}

// parseTOML parses a text into its top table, or complains once and returns nil.
func parseTOML(doc *document, text string) *table {
	lines, deep := indexLines(text)
	doc.lines = lines
	refuse := func(line int, key, found, accepted string) *table {
		doc.report.add(doc.order, Complaint{File: doc.name, Line: line, Key: key, Found: found, Accepted: accepted})
		return nil
	}
	if deep != nil {
		return refuse(deep.line, "", deep.what, "a flatter file")
	}
	keys := map[string]any{}
	if _, err := toml.Decode(text, &keys); err != nil {
		var fault toml.ParseError
		if !errors.As(err, &fault) {
			return refuse(0, "", err.Error(), "TOML")
		}
		return refuse(fault.Position.Line, fault.LastKey, "broken TOML ("+faultText(fault)+")", "TOML 1.0")
	}
	return newTable(doc, "", "", keys)
}

// faultText is the library's message on one line, with the column.
func faultText(fault toml.ParseError) string {
	message := strings.Join(strings.Fields(fault.Message), " ")
	if fault.Position.Col > 0 {
		return fmt.Sprintf("column %d: %s", fault.Position.Col, message)
	}
	return message
}

// beforeFault parses the part of campaign.toml before the line that could not be parsed.
func (l *loader) beforeFault(text string) *table {
	l.unsure["site"], l.unsure["receiver"] = true, true
	placed := l.report.placed
	line := placed[len(placed)-1].Line
	lines := strings.SplitAfter(text, "\n")
	if line < 1 || line > len(lines) {
		return nil
	}
	var unheard report
	return parseTOML(&document{report: &unheard}, strings.Join(lines[:line-1], ""))
}

// format checks the version of the file: a newer one is not understood, so nothing else in it is judged.
func (t *table) format(needed bool) bool {
	accepted := fmt.Sprint(Format)
	v, ok := t.ask("format", needed, accepted+", the version of the file format")
	if !ok {
		return true
	}
	n, ok := v.(int64)
	if !ok || n < Format {
		t.complain("format", describe(v), accepted, "")
		return true
	}
	if n > Format {
		t.complain("format", describe(v), accepted, "this file was written for a newer version of tallystick, which is needed to read it")
		return false
	}
	return true
}

// include reads the files that campaign.include names.
func (l *loader) include(c *table) {
	if c == nil {
		return
	}
	patterns := c.texts("include", false)
	c.done(nil)
	for i, pattern := range patterns {
		line := c.elementLine("include", i)
		files, err := l.glob(pattern)
		if err != nil {
			c.complainAt(line, "include", fmt.Sprintf("%q", pattern), err.Error(), "")
			continue
		}
		if len(files) == 0 {
			c.complainAt(line, "include", fmt.Sprintf("%q, which no file matches", pattern), "patterns of files that exist", "")
		}
		for _, file := range files {
			if slices.Contains(l.files, file) {
				continue // also matched by an earlier pattern
			}
			if len(l.files) > mostFiles {
				c.complainAt(line, "include", "too many files", fmt.Sprintf("at most %d", mostFiles), "")
				return
			}
			l.included(c, line, file)
		}
	}
}

// glob finds the files of a pattern, which may not lead out of the campaign's folder.
func (l *loader) glob(pattern string) ([]string, error) {
	outside := strings.Contains(pattern, `\`) || !fs.ValidPath(pattern) || pattern == "."
	if outside {
		return nil, errors.New("a path inside the campaign's folder, with forward slashes and without .., such as \"sources/*.toml\"")
	}
	if _, err := path.Match(pattern, ""); err != nil {
		return nil, errors.New("a pattern with *, ? and [a-z], such as \"sources/*.toml\"")
	}
	files, err := fs.Glob(l.fsys, pattern)
	slices.Sort(files)
	return files, err
}

func (l *loader) included(c *table, line int, file string) {
	text, err := readText(l.fsys, file)
	if err != nil {
		c.complainAt(line, "include", fmt.Sprintf("%s, which cannot be read (%v)", l.called(file), err), "readable TOML files", "")
		return
	}
	top := l.open(file, text)
	if top == nil || !top.format(false) {
		return
	}
	l.readSources(top)
	top.done(func(key string) (string, string, bool) {
		home := slices.Contains([]string{"campaign", "site", "receiver", "session"}, key)
		return "a key that is not read in an included file", "sources only; it belongs in " + CampaignFile, home
	})
}

// readText reads a whole file, but nothing that is not a plain file and nothing without end.
func readText(fsys fs.FS, name string) (string, error) {
	info, err := fs.Stat(fsys, name)
	if err != nil {
		return "", reason(err)
	}
	if !info.Mode().IsRegular() {
		return "", errors.New("not a file")
	}
	f, err := fsys.Open(name)
	if err != nil {
		return "", reason(err)
	}
	defer f.Close()
	b, err := io.ReadAll(io.LimitReader(f, largestFile+1))
	if err != nil {
		return "", reason(err)
	}
	if len(b) > largestFile {
		return "", fmt.Errorf("larger than %d MB", largestFile>>20)
	}
	return string(b), nil
}

// reason is an error without the name of the file, which the message around it gives.
func reason(err error) error {
	var pe *fs.PathError
	if errors.As(err, &pe) {
		return pe.Err
	}
	return err
}

// once complains when a name was used before for the same kind of thing.
func (l *loader) once(t *table, kind, name string) bool {
	if name == "" {
		l.unsure[kind] = true
		return false
	}
	key := kind + "\x00" + name
	if first, ok := l.firstAt[key]; ok {
		t.complain("name", fmt.Sprintf("%q, already used at %s", name, first), "a name that no other "+kind+" has", "")
		return false
	}
	l.firstAt[key] = fmt.Sprintf("%s:%d", t.doc.name, t.line("name"))
	return true
}
