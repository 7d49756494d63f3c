package campaigns

import (
	"strings"
	"testing"

	"github.com/BurntSushi/toml"
	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func TestIndexLines(t *testing.T) {
	text := strings.Join([]string{
		`# [[source]] in a comment`,                // 1
		`title = "with # and [[x]] and \" quotes"`, // 2
		`[[source]]`,     // 3
		`name = 'a'`,     // 4
		`text = """`,     // 5
		`[[source]]`,     // 6 inside the text
		`name = "no" \`,  // 7
		`""" # the end`,  // 8
		`[source.orbit]`, // 9
		`eclipse = { half = 0.1, "odd.key" = [1,`, // 10: newer TOML lets inline tables go on
		`  2, { deep = 3 }] }`,                    // 11
		`[[source.aim]]`,                          // 12
		`kind = "x"`,                              // 13
		`[[source.aim]]`,                          // 14
		`list = [ # comment ]`,                    // 15
		`  ["a", "b"],`,                           // 16
		`  # ["c"],`,                              // 17
		`  ['''`,                                  // 18
		`]''', 2],`,                               // 19
		`]`,                                       // 20
		`[[source]]`,                              // 21
		`spin.frequency = 3`,                      // 22
		`spin . "epoch" = 4`,                      // 23
		`[[source.aim]]`,                          // 24
		`kind = """a"""""`,                        // 25
		`every = 4`,                               // 26
		`[ site . "x y" ]`,                        // 27
		`k = 1979-05-27T07:32:00Z`,                // 28
	}, "\n")
	want := lineIndex{
		"title":     2,
		"source":    3,
		"source[0]": 3, "source[0].name": 4, "source[0].text": 5,
		"source[0].orbit": 9, "source[0].orbit.eclipse": 10, "source[0].orbit.eclipse.half": 10,
		`source[0].orbit.eclipse."odd.key"`: 10, `source[0].orbit.eclipse."odd.key"[0]`: 10, `source[0].orbit.eclipse."odd.key"[1]`: 11,
		`source[0].orbit.eclipse."odd.key"[2]`: 11, `source[0].orbit.eclipse."odd.key"[2].deep`: 11,
		"source[0].aim": 12, "source[0].aim[0]": 12, "source[0].aim[0].kind": 13,
		"source[0].aim[1]": 14, "source[0].aim[1].list": 15,
		"source[0].aim[1].list[0]": 16, "source[0].aim[1].list[0][0]": 16, "source[0].aim[1].list[0][1]": 16,
		"source[0].aim[1].list[1]": 18, "source[0].aim[1].list[1][0]": 18, "source[0].aim[1].list[1][1]": 19,
		"source[1]": 21, "source[1].spin": 22, "source[1].spin.frequency": 22, "source[1].spin.epoch": 23,
		"source[1].aim": 24, "source[1].aim[0]": 24, "source[1].aim[0].kind": 25, "source[1].aim[0].every": 26,
		"site": 27, "site.x y": 27, "site.x y.k": 28,
	}
	for _, newline := range []string{"\n", "\r\n"} {
		got, deep := indexLines("\uFEFF" + strings.ReplaceAll(text, "\n", newline))
		if diff := cmp.Diff(want, got); diff != "" || deep != nil {
			t.Errorf("newline %q, deep %v, -want +got:\n%s", newline, deep, diff)
		}
	}
}

// Random tables are written, each key on a line that is known, and must be found there.
func TestIndexLinesProperty(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		line := 1
		put := func(s string) { b.WriteString(s); line += strings.Count(s, "\n") }
		want := lineIndex{}
		values := []string{"1", `"a # b"`, `'[x]'`, "[1, 2]", "[\n 1, # ]\n 2\n]", "\"\"\"\n[[e]]\nk = 1\n\"\"\"", "'''\n'''", "{ a = 1, b = [ {c = 2} ] }", "2026-01-01", `"\\"`, `"""\""""`}
		entries := rapid.IntRange(1, 6).Draw(t, "entries")
		for e := range entries {
			place := elementOf("e", e)
			want[place] = line
			put("[[e]]\n")
			for k := range rapid.IntRange(0, 5).Draw(t, "keys") {
				key := string(rune('m' + k))
				if rapid.Bool().Draw(t, "comment") {
					put("# [[e]] \"\n\n")
				}
				want[placeOf(place, key)] = line
				put("  " + key + " = " + rapid.SampledFrom(values).Draw(t, "value") + "  # \"'[\n")
			}
			for a := range rapid.IntRange(0, 3).Draw(t, "inner") {
				inner := elementOf(place+".aim", a)
				want[inner] = line
				put("[[e.aim]]\n")
				want[inner+".kind"] = line
				put("kind = 1\n")
			}
		}
		if _, err := toml.Decode(b.String(), &map[string]any{}); err != nil {
			t.Fatalf("the test writes wrong TOML: %v\n%s", err, b.String())
		}
		got, _ := indexLines(b.String())
		for place, n := range want {
			if got[place] != n {
				t.Fatalf("%s on line %d, want %d in\n%s", place, got[place], n, b.String())
			}
		}
	})
}

func TestIndexLinesRefusesEndlessNesting(t *testing.T) {
	for name, text := range map[string]string{
		"arrays":        "a = 1\nb = " + strings.Repeat("[", 1_000_000),
		"inline tables": "a = 1\nb = " + strings.Repeat("{a=", 1_000_000),
		"dotted key":    "a = 1\n" + strings.Repeat("a.", 1_000_000) + "a = 1",
		"header":        "a = 1\n[" + strings.Repeat("a.", 1_000_000) + "a]",
	} {
		if _, deep := indexLines(text); deep == nil || deep.line != 2 {
			t.Errorf("%s: %v; want line 2", name, deep)
		}
	}
}
