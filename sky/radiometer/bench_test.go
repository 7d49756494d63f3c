package radiometer

import "testing"

func BenchmarkEffectiveWeights(b *testing.B) {
	s := example()
	el := make([]float64, 720)
	for i := range el {
		el[i] = 10 + float64(i)/10
	}
	var w []float64
	b.ReportAllocs()
	for b.Loop() {
		w = s.EffectiveWeights(el, w)
	}
}

func BenchmarkTOAError(b *testing.B) {
	s, el := example(), 10.0
	b.ReportAllocs()
	for b.Loop() {
		s.TOAErrorUs(1, el)
		if el += 0.1; el > 89 {
			el = 10
		}
	}
}
