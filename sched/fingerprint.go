package sched

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"hash"
	"math"
)

// Ground is a digest of everything a problem is made of but grid, bars, pins and time past: of what does
// not change while a plan is made.
type Ground [sha256.Size]byte

// Ground returns the digest. It reads the whole of the problem: some milliseconds for the longest sessions.
func (p *Problem) Ground() Ground {
	w := digest{hash: sha256.New()}
	w.text("tallystick problem 1")
	w.text(p.Session)
	w.number(p.Start.Unix(), int64(p.Start.Nanosecond()))
	w.yes(p.Cropped)
	w.numbers(p.Minutes, p.OverheadSec, len(p.Receivers), len(p.Breaks), len(p.Jobs), len(p.Nodes))
	for _, r := range p.Receivers {
		w.text(r.Name)
		w.numbers(r.ChangeSec)
	}
	for _, b := range p.Breaks {
		w.numbers(b.From, b.To)
	}
	w.numbers(p.Slew.Places, p.Slew.BinMin, p.Slew.Bins, len(p.Slew.Sec))
	w.fold(p.Slew.Sec)
	for i := range p.Jobs {
		w.job(&p.Jobs[i])
	}
	for i := range p.Nodes {
		n := &p.Nodes[i]
		w.numbers(n.Job, n.Place, n.Turn, len(n.Open))
		for _, o := range n.Open {
			w.numbers(o.From, o.To)
			w.text(o.OpensBy)
			w.text(o.ClosesBy)
		}
	}
	return Ground(w.sum())
}

// Fingerprint returns in hexadecimal digits what the ceiling and all it was proved for come to: the same for the same
// problem on every processor, another where anything differs. The ground is that of the bound's problem.
func (b Bound) Fingerprint(ground Ground) string {
	p := b.Of
	w := digest{hash: sha256.New()}
	w.text(string(ground[:]))
	w.numbers(p.GridMin, p.FromMin, len(p.Jobs), len(p.Pins))
	for i := range p.Jobs {
		w.yes(p.Jobs[i].Barred)
	}
	for _, s := range p.Pins {
		w.numbers(s.Node, s.Start, s.End)
		w.yes(s.Pinned)
		w.text(s.Note)
	}
	w.yes(b.Complete)
	w.number(int64(b.Ceiling))
	return hex.EncodeToString(w.sum())
}

// A digest writes each value in a form that none other has, and hashes them a page at a time.
type digest struct {
	hash hash.Hash
	page []byte
}

func (w *digest) job(j *Job) {
	w.text(j.Source)
	w.numbers(j.Receiver, j.MinMin, j.MaxMin, j.MaxSlots, len(j.Terms))
	w.real(j.Priority)
	w.yes(j.Must)
	for i := range j.Terms {
		t := &j.Terms[i]
		w.text(string(t.Kind))
		w.text(t.Label)
		w.text(string(t.Curve))
		w.text(t.Why)
		w.number(int64(t.Scale), int64(t.Wanted), int64(t.Least), int64(len(t.Cum)))
		for _, c := range t.Cum {
			w.page = binary.LittleEndian.AppendUint32(w.page, uint32(c))
		}
		w.turn()
	}
	f := &j.Facts
	w.numbers(f.UpMin, f.SunMin, f.ClearMin)
	w.real(f.SunDeg)
	w.real(f.SunLimit)
	w.real(f.HighestEl)
	w.real(f.Debt)
	w.text(f.DebtAim)
	w.yes(f.Crowded)
}

func (w *digest) text(s string) {
	w.number(int64(len(s)))
	w.page = append(w.page, s...)
}

func (w *digest) numbers(all ...int) {
	for _, n := range all {
		w.number(int64(n))
	}
}

func (w *digest) number(all ...int64) {
	for _, n := range all {
		w.page = binary.LittleEndian.AppendUint64(w.page, uint64(n))
	}
	w.turn()
}

// fold writes what a long table comes to: two sums of 64 bits, every step of which can be undone, so that no
// single change is lost. Hashed in full the slews would take ten times as long as all the rest.
func (w *digest) fold(table []uint16) {
	a, b := uint64(14695981039346656037), uint64(1)
	for len(table) >= 4 {
		x := uint64(table[0]) | uint64(table[1])<<16 | uint64(table[2])<<32 | uint64(table[3])<<48
		a = (a ^ x) * 1099511628211
		b = (b + x) * 0x9e3779b97f4a7c15
		a, b = a^a>>32, b^b>>29
		table = table[4:]
	}
	for _, x := range table {
		a, b = (a^uint64(x))*1099511628211, (b+uint64(x))*0x9e3779b97f4a7c15
	}
	w.number(int64(a), int64(b))
}

// real writes a number in millionths: what lies below is the processor's, not the problem's.
func (w *digest) real(x float64) { w.number(int64(math.Round(x * 1e6))) }

func (w *digest) yes(is bool) {
	n := int64(0)
	if is {
		n = 1
	}
	w.number(n)
}

const pageBytes = 1 << 15

func (w *digest) turn() {
	if len(w.page) >= pageBytes {
		w.flush()
	}
}

func (w *digest) flush() {
	w.hash.Write(w.page)
	w.page = w.page[:0]
}

func (w *digest) sum() []byte {
	w.flush()
	return w.hash.Sum(nil)
}
