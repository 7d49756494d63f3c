package sched

import (
	"fmt"
	"reflect"
	"testing"
	"time"
)

// Nothing that a problem is made of can change without its fingerprint.
func TestFingerprintSeesEverything(t *testing.T) {
	whole := func() *Bound {
		p := generate(instance{sources: 6, minutes: 120, grid: 1, receivers: 2, breaks: 1, calibrators: 1, long: 1, seed: 1})
		p.Pins = []Slot{{Node: 1, Start: 3, End: 9, Note: "n"}}
		return &Bound{Of: p, Ceiling: Unit}
	}
	print := func(b *Bound) string { return b.Fingerprint(b.Of.Ground()) }
	plain := print(whole())
	if print(whole()) != plain {
		t.Fatal("the same problem has two fingerprints")
	}
	seen := map[string]string{}
	// walk calls visit with each value below v, and how to find it again.
	var walk func(v reflect.Value, path string, visit func(reflect.Value, string))
	walk = func(v reflect.Value, path string, visit func(reflect.Value, string)) {
		switch {
		case v.Type() == reflect.TypeFor[time.Time]() || v.Kind() != reflect.Struct && v.Kind() != reflect.Slice && v.Kind() != reflect.Pointer:
			visit(v, path)
		case v.Kind() == reflect.Pointer:
			walk(v.Elem(), path, visit)
		case v.Kind() == reflect.Slice:
			visit(v, path+"[]")
			if v.Len() > 0 { // the last stands for all
				walk(v.Index(v.Len()-1), fmt.Sprintf("%s[%d]", path, v.Len()-1), visit)
			}
		default:
			for i := range v.NumField() {
				if f := v.Type().Field(i); f.IsExported() {
					walk(v.Field(i), path+"."+f.Name, visit)
				}
			}
		}
	}
	var paths []string
	walk(reflect.ValueOf(whole()).Elem(), "", func(_ reflect.Value, path string) { paths = append(paths, path) })
	for _, path := range paths {
		b := whole()
		walk(reflect.ValueOf(b).Elem(), "", func(v reflect.Value, at string) {
			if at != path {
				return
			}
			switch {
			case v.Type() == reflect.TypeFor[time.Time]():
				v.Set(reflect.ValueOf(v.Interface().(time.Time).Add(time.Minute)))
			case v.Kind() == reflect.Slice:
				v.Set(reflect.Append(v, reflect.New(v.Type().Elem()).Elem()))
			case v.CanInt():
				v.SetInt(v.Int() + 1)
			case v.CanUint():
				v.SetUint(v.Uint() + 1)
			case v.CanFloat():
				v.SetFloat(v.Float() + 0.001)
			case v.Kind() == reflect.String:
				v.SetString(v.String() + "x")
			case v.Kind() == reflect.Bool:
				v.SetBool(!v.Bool())
			default:
				t.Fatalf("%s is a %v: not known here", path, v.Kind())
			}
		})
		got := print(b)
		if got == plain {
			t.Errorf("%s changes and the fingerprint does not", path)
		}
		if other, ok := seen[got]; ok {
			t.Errorf("%s and %s change it alike", path, other)
		}
		seen[got] = path
	}
	if len(paths) < 50 {
		t.Errorf("only %d values were changed: %v", len(paths), paths)
	}
}

// Written down once: every processor and every later version must come to the same.
func TestFingerprintIsTheSameEverywhere(t *testing.T) {
	p := tinyPlain()
	b := Bound{Of: p, Ceiling: 3 * Unit, Complete: true}
	const want = "fff53f0ce3e60fb39b468d09b34c97db1867df8b08df7b43ba828595dc11f208"
	if got := b.Fingerprint(p.Ground()); got != want {
		t.Errorf("fingerprint %s, want %s", got, want)
	}
}

// tinyPlain is a problem without a number that any processor could round.
func tinyPlain() *Problem {
	return &Problem{Session: "night", Start: time.Date(2031, 1, 1, 20, 0, 0, 0, time.UTC), Minutes: 10, GridMin: 1, Receivers: []Receiver{{"L", 60}},
		Slew: SlewTable{Places: 1, BinMin: 5, Bins: 2, Sec: []uint16{0, 0}}, Nodes: []Node{{Open: []Window{{Span: Span{0, 10}, OpensBy: "session start"}}}},
		Jobs: []Job{{Source: "a", Priority: 1.5, MinMin: 2, MaxMin: 4, MaxSlots: 1, Facts: Facts{SunDeg: 60.5},
			Terms: []Term{{Kind: Cadence, Scale: Unit, Curve: Share, Wanted: 400, Cum: plainMinutes(10)}}}},
		Pins: []Slot{{Start: 3, End: 6, Pinned: true}}}
}

// BenchmarkFingerprint is the digest of a session of 15 hours with 120 sources, and what changes while it is edited.
func BenchmarkFingerprint(b *testing.B) {
	p := generate(instance{sources: 120, minutes: 900, grid: 1, receivers: 2, breaks: 1, calibrators: 2, long: 4, seed: 1})
	b.Run("ground", func(b *testing.B) {
		for b.Loop() {
			p.Ground()
		}
	})
	ground := p.Ground()
	b.Run("edit", func(b *testing.B) {
		for b.Loop() {
			Bound{Of: p, Ceiling: Unit}.Fingerprint(ground)
		}
	})
}
