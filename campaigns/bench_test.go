package campaigns

import (
	"fmt"
	"os"
	"strings"
	"testing"
	"testing/fstest"
)

// manySources is a campaign with copies of the sample's first source, which has every key.
func manySources(b *testing.B, n int) fstest.MapFS {
	b.Helper()
	text, err := os.ReadFile("testdata/sample/campaign.toml")
	if err != nil {
		b.Fatal(err)
	}
	from, to := strings.Index(string(text), "[[source]]"), strings.Index(string(text), "[[session]]")
	source := string(text[from:to])
	var all strings.Builder
	all.WriteString(strings.Replace(string(text[:from]), `include = ["sources/*.toml"]`, "", 1))
	for i := range n {
		all.WriteString(strings.Replace(source, "J0214+3322", fmt.Sprintf("J0214+%04d", i), 1))
	}
	all.Write(text[to:])
	return fstest.MapFS{CampaignFile: {Data: []byte(all.String())}}
}

func BenchmarkLoad(b *testing.B) {
	for _, n := range []int{45, 2000} {
		b.Run(fmt.Sprintf("%d sources", n), func(b *testing.B) {
			fsys := manySources(b, n)
			b.SetBytes(int64(len(fsys[CampaignFile].Data)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := LoadFS(fsys, ""); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkReadLogbook(b *testing.B) {
	var text strings.Builder
	text.WriteString(header)
	for n := range 500_000 {
		text.WriteString(line(n))
	}
	b.SetBytes(int64(text.Len()))
	b.ReportAllocs()
	for b.Loop() {
		if book, complaints := ReadLogbook(strings.NewReader(text.String()), ""); len(book.Entries) != 500_000 || len(complaints) > 0 {
			b.Fatal(len(book.Entries), complaints)
		}
	}
}

func BenchmarkEffective(b *testing.B) {
	var text strings.Builder
	text.WriteString(header)
	for n := range 500_000 {
		text.WriteString(line(n))
	}
	book, _ := ReadLogbook(strings.NewReader(text.String()), "")
	b.ReportAllocs()
	for b.Loop() {
		if len(book.Effective()) != 500_000 {
			b.Fatal("entries were lost")
		}
	}
}
