package campaigns

import (
	"bytes"
	"errors"
	"fmt"
	"hash/maphash"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/campaigns/demo"
)

// A Folder is where a campaign lives: its files on the disk, or the built-in demonstration in memory.
// It is for one goroutine at a time.
type Folder struct {
	Campaign *Campaign
	Logbook  *Logbook
	Damage   Complaints // lines of the logbook that could not be read and do not count
	Notices  []string   // what the user should know about the files, in plain words

	name  string
	demo  bool
	files []string // TOML files of the campaign, campaign.toml first
	fsys  fs.FS    // where they are
	store store
	plans map[string]*knownPlan // by session

	// What was hashed is what Logbook was made of: reading it anew costs little while nobody else writes.
	hashed *maphash.Hash
}

// A store keeps the files that the program writes.
type store interface {
	read(name string) ([]byte, error) // the error is fs.ErrNotExist when there is no such file
	lock() (unlock func(), err error)
	replace(name string, data []byte) error
	extend(name string, data []byte) error
}

// knownPlan is what the file of a plan held when it was last read or written here. Nil is no file.
type knownPlan struct {
	data      []byte
	attempted []byte // what a save that failed may have left
}

// ErrChanged means that a file is no longer as it was when this program read or wrote it, so that saving
// would wipe out somebody else's work. Reading the plan again with Folder.Plan shows what is there now;
// a save after that replaces it.
var ErrChanged = errors.New("the file was changed by another program since it was read")

// tornFile is where a torn end of the logbook is set aside.
const tornFile = LogbookFile + ".torn"

// Open reads the campaign in a folder. It writes nothing.
func Open(dir string) (*Folder, error) {
	f := &Folder{name: filepath.Clean(dir), fsys: os.DirFS(dir), store: disk{dir}}
	return f, f.open()
}

// OpenDemo opens the built-in demonstration. Its plans and new log entries are kept in memory until SaveTo.
func OpenDemo() (*Folder, error) {
	logbook, err := demo.Files.ReadFile(LogbookFile)
	if err != nil {
		return nil, err
	}
	f := &Folder{name: "built-in demonstration", demo: true, fsys: demo.Files, store: memory{LogbookFile: logbook}}
	return f, f.open()
}

func (f *Folder) open() error {
	var err error
	f.plans = map[string]*knownPlan{}
	if f.Campaign, f.files, err = load(f.fsys, f.name); err != nil {
		return err
	}
	if _, err = f.readLogbook(); err != nil {
		return err
	}
	if torn := f.Logbook.Torn; torn != "" {
		f.Notices = append(f.Notices, fmt.Sprintf("%s ends with a torn line of %d bytes, left by a save that was cut short; it does not count, and the next entry will set it aside in %s",
			f.path(LogbookFile), len(torn), tornFile))
	}
	if n := len(f.Damage); n > 0 {
		f.Notices = append(f.Notices, fmt.Sprintf("%s: %s left out; the first: %s", f.path(LogbookFile), count(n, "damaged line"), f.Damage[0].Error()))
	}
	f.Notices = append(f.Notices, f.strangers()...)
	return nil
}

// path is what a file is called in messages.
func (f *Folder) path(name string) string { return filepath.Join(f.name, filepath.FromSlash(name)) }

// Demo says that this is the built-in demonstration.
func (f *Folder) Demo() bool { return f.demo }

// Name is what to call the campaign's place on a screen.
func (f *Folder) Name() string { return f.name }

// Now is the demonstration's own present, which is fixed; other campaigns have none.
func (f *Folder) Now() (now time.Time, fixed bool) {
	if f.demo {
		return demo.Now(), true
	}
	return time.Time{}, false
}

// readLogbook reads the logbook, anew when it has changed, and returns its text. No logbook is an empty one.
func (f *Folder) readLogbook() (string, error) {
	data, err := f.store.read(LogbookFile)
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return "", fmt.Errorf("%s cannot be read: %w", f.path(LogbookFile), reason(err))
	}
	if f.hashed != nil {
		var now maphash.Hash
		now.SetSeed(f.hashed.Seed())
		now.Write(data)
		if now.Sum64() == f.hashed.Sum64() {
			return string(data), nil
		}
	}
	text := string(data)
	f.Logbook, f.Damage = parseLogbook(text, f.path(LogbookFile))
	f.hashed = new(maphash.Hash)
	f.hashed.Write(data)
	return text, nil
}

// strangers names what the logbook mentions and the campaign does not have.
func (f *Folder) strangers() []string {
	kinds := []struct {
		kind  string
		names []string
		of    func(*Entry) string
	}{
		{"site", nil, func(e *Entry) string { return e.Site }},
		{"source", nil, func(e *Entry) string { return e.Source }},
		{"receiver", nil, func(e *Entry) string { return e.Receiver }},
	}
	for _, s := range f.Campaign.Sites {
		kinds[0].names = append(kinds[0].names, s.Name)
	}
	for _, s := range f.Campaign.Sources {
		kinds[1].names = append(kinds[1].names, s.Name)
	}
	for _, r := range f.Campaign.Receivers {
		kinds[2].names = append(kinds[2].names, r.Name)
	}
	var notices []string
	for _, k := range kinds {
		known := map[string]bool{}
		for _, n := range k.names {
			known[n] = true
		}
		counts := map[string]int{}
		last := "" // the one before it was known
		for i := range f.Logbook.Entries {
			n := k.of(&f.Logbook.Entries[i])
			if n == last {
				continue
			}
			if !known[n] {
				counts[n]++
				continue
			}
			last = n
		}
		var unknown []string
		for n := range counts {
			unknown = append(unknown, n)
		}
		slices.Sort(unknown)
		for i, n := range unknown {
			if i == 5 {
				notices = append(notices, fmt.Sprintf("%s names %d more %ss that the campaign does not have", f.path(LogbookFile), len(unknown)-i, k.kind))
				break
			}
			notice := fmt.Sprintf("%s has %d entries of the %s %q, which the campaign does not have; they do not count", f.path(LogbookFile), counts[n], k.kind, n)
			if hint := didYouMean(n, k.names); hint != "" {
				notice += " (" + hint + ")"
			}
			notices = append(notices, notice)
		}
	}
	return notices
}

// Plan reads the saved plan of a session: nil without an error when there is none. A plan that is damaged
// or was written by a newer version is an error of type Complaints.
func (f *Folder) Plan(session string) (*SavedPlan, error) {
	name := planFile(session)
	data, err := f.store.read(name)
	if errors.Is(err, fs.ErrNotExist) {
		f.plans[session] = &knownPlan{}
		return nil, nil
	}
	if err != nil {
		return nil, fmt.Errorf("%s cannot be read: %w", f.path(name), reason(err))
	}
	if len(data) > largestFile {
		return nil, fmt.Errorf("%s: found more than %d MB; accepted: a plan", f.path(name), largestFile>>20)
	}
	p, complaints := decodePlan(string(data), f.path(name))
	if err := complaints.err(); err != nil {
		return nil, err
	}
	f.plans[session] = &knownPlan{data: data}
	return p, nil
}

// SavePlan saves the plan of its session. When it returns without an error the plan is on the disk. It
// replaces only what this Folder has read or written itself: otherwise the error is ErrChanged.
func (f *Folder) SavePlan(p *SavedPlan) error {
	name := planFile(p.Session)
	data := p.encode()
	if _, complaints := decodePlan(string(data), f.path(name)); len(complaints) > 0 {
		return fmt.Errorf("the plan cannot be saved: %w", complaints)
	}
	return f.saved(name, func() error {
		now, err := f.store.read(name)
		if err != nil && !errors.Is(err, fs.ErrNotExist) {
			return err
		}
		known := f.plans[p.Session]
		if known == nil {
			known = &knownPlan{}
		}
		leftByUs := known.attempted != nil && same(now, known.attempted)
		if !same(now, known.data) && !leftByUs && !same(now, data) {
			return ErrChanged
		}
		f.plans[p.Session] = &knownPlan{data: known.data, attempted: data}
		if err := f.store.replace(name, data); err != nil {
			return err
		}
		f.plans[p.Session] = &knownPlan{data: data}
		return nil
	})
}

// same compares the contents of files; nil is no file, which differs from an empty one.
func same(a, b []byte) bool { return (a == nil) == (b == nil) && bytes.Equal(a, b) }

// saved runs a save under the lock, and names the file when it fails.
func (f *Folder) saved(name string, save func() error) error {
	unlock, err := f.store.lock()
	if err == nil {
		defer unlock()
		err = save()
	}
	if err != nil {
		return fmt.Errorf("%s is not saved: %w", f.path(name), err)
	}
	return nil
}

// AppendLog adds entries to the logbook. When it returns without an error they are on the disk. The
// logbook is read again, so Folder.Logbook then also has what other programs have added; it is a new
// one, and whoever holds the old one keeps that as it was. A torn end that an earlier save left is first
// set aside in a file beside the logbook.
func (f *Folder) AppendLog(entries []Entry) error {
	for i, e := range entries {
		if err := e.Check(); err != nil {
			return fmt.Errorf("entry %d (%s, %s): %w", i+1, e.Source, utcCell(e.Start), err)
		}
	}
	if len(entries) == 0 {
		return nil
	}
	return f.saved(LogbookFile, func() error {
		text, err := f.readLogbook()
		if err != nil {
			return err
		}
		torn := f.Logbook.Torn
		kept := strings.TrimSuffix(text, torn)
		lines, added, err := f.records(kept, entries)
		if err != nil {
			return err
		}
		if torn == "" {
			err = f.store.extend(LogbookFile, lines)
		} else if err = f.store.extend(tornFile, []byte(torn+"\n")); err == nil {
			// Cutting the end off in place could lose the line before it when the power fails.
			err = f.store.replace(LogbookFile, append([]byte(kept), lines...))
		}
		if err != nil {
			return err
		}
		if torn != "" {
			f.Notices = append(f.Notices, fmt.Sprintf("the torn line at the end of %s was set aside in %s", f.path(LogbookFile), f.path(tornFile)))
		}
		if f.hashed.Write(lines); torn != "" {
			f.hashed = nil
		}
		book := *f.Logbook
		book.Torn, book.Entries = "", append(book.Entries, added...)
		f.Logbook = &book
		return nil
	})
}

// records are the bytes that add entries to a logbook of which text is what there is, and the entries as
// they will be read again.
func (f *Folder) records(text string, entries []Entry) ([]byte, []Entry, error) {
	newline := "\r\n" // RFC 4180; an existing logbook keeps its own
	if first := strings.IndexByte(text, '\n'); first >= 0 && !strings.HasSuffix(text[:first], "\r") {
		newline = "\n"
	}
	head := appendCells(nil, f.Logbook.Header, newline)
	var lines []byte
	for _, e := range entries {
		lines = f.Logbook.record(lines, e, newline)
	}
	// The entries are read back before they are written: a header that is damaged, or has no column for
	// something, must not swallow it.
	again, faults := parseLogbook(string(head)+string(lines), f.path(LogbookFile))
	sound := sameEntries(again.Entries, entries)
	start, before := lineStart(text, head, newline)
	lines = append(start, lines...)
	if sound && len(f.Damage) > 0 {
		// What a damaged header is taken for also depends on the lines below it.
		whole, _ := parseLogbook(text+string(lines), "")
		n := len(whole.Entries) - len(entries)
		sound = n == len(f.Logbook.Entries) && sameEntries(whole.Entries[:n], f.Logbook.Entries) && sameEntries(whole.Entries[n:], entries)
	}
	if !sound {
		if faults = append(faults, f.Damage...); len(faults) > 0 {
			return nil, nil, fmt.Errorf("new entries do not fit what is there: %w", faults)
		}
		return nil, nil, errors.New("found a header that new entries do not fit; accepted: " + strings.Join(logbookColumns, ","))
	}
	for i := range again.Entries {
		again.Entries[i].Line += before
	}
	return lines, again.Entries, nil
}

func sameEntries(read, meant []Entry) bool {
	if len(read) != len(meant) {
		return false
	}
	for i := range read {
		if !read[i].saysAsMuchAs(meant[i]) {
			return false
		}
	}
	return true
}

// lineStart is what must be written before a new entry, and the lines above the entry without the header.
func lineStart(text string, head []byte, newline string) (start []byte, before int) {
	before = strings.Count(text, "\n") - 1
	switch {
	case strings.TrimSpace(strings.TrimPrefix(text, "\uFEFF")) == "":
		return head, before + 1
	case !strings.HasSuffix(text, "\n"):
		return []byte(newline), before + 1
	}
	return nil, before
}

// SaveTo writes the whole campaign, its logbook and the plans of its sessions into a folder that is new
// or empty. campaign.toml comes last, so that a copy that was cut short is not taken for a campaign.
func (f *Folder) SaveTo(dir string) error {
	if err := emptyFolder(dir); err != nil {
		return err
	}
	to := disk{dir}
	unlock, err := to.lock()
	if err != nil {
		return err
	}
	defer unlock()
	names := []string{LogbookFile}
	for _, s := range f.Campaign.Sessions {
		names = append(names, planFile(s.Name))
	}
	for _, name := range names {
		data, err := f.store.read(name)
		if errors.Is(err, fs.ErrNotExist) {
			continue
		}
		if err == nil {
			err = to.replace(name, data)
		}
		if err != nil {
			return fmt.Errorf("%s is not copied: %w", f.path(name), err)
		}
	}
	for _, name := range slices.Backward(f.files) {
		data, err := fs.ReadFile(f.fsys, name)
		if err == nil {
			err = to.replace(name, data)
		}
		if err != nil {
			return fmt.Errorf("%s is not copied: %w", f.path(name), err)
		}
	}
	return nil
}

// emptyFolder makes a folder, or accepts one that is there and empty.
func emptyFolder(dir string) error {
	d, err := os.Open(dir)
	if errors.Is(err, fs.ErrNotExist) {
		return makeFolder(dir)
	}
	if err != nil {
		return err
	}
	defer d.Close()
	switch names, err := d.Readdirnames(1); {
	case errors.Is(err, io.EOF):
		return nil
	case err != nil:
		return err
	default:
		return fmt.Errorf("%s: found a folder that is not empty (%s is in it); accepted: a new or an empty folder", dir, names[0])
	}
}
