package special

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mathext"
)

var sink float64

// points are arguments of every algorithm; the names tell which.
var points = []struct {
	name string
	a, z float64
}{
	{"alternating", 0.7, 0.5},
	{"small-shape", 0.1, 0.05},
	{"small-shape-to-lower", 0.1, 1e-6},
	{"series", 2.5, 1.2},
	{"series-transition", 30, 29},
	{"fraction", 0.7, 2.5},
	{"fraction-tail", 0.7, 40},
	{"fraction-transition", 30, 31},
	{"fraction-transition-100", 100, 101},
	{"quadrature-lower", 1e4, 9950},
	{"quadrature-upper", 1e4, 10050},
}

func BenchmarkLogUpperJet(b *testing.B) {
	for _, p := range points {
		b.Run(fmt.Sprintf("%s/a=%g,z=%g", p.name, p.a, p.z), func(b *testing.B) {
			for b.Loop() {
				sink = LogUpperJet(p.a, p.z).DAA
			}
		})
	}
}

func BenchmarkLogLowerJet(b *testing.B) {
	for _, p := range points {
		b.Run(fmt.Sprintf("%s/a=%g,z=%g", p.name, p.a, p.z), func(b *testing.B) {
			for b.Loop() {
				sink = LogLowerJet(p.a, p.z).DAA
			}
		})
	}
}

// BenchmarkShapeLogUpperJet leaves out what depends on the shape alone.
func BenchmarkShapeLogUpperJet(b *testing.B) {
	for _, p := range points {
		s := NewShape(p.a)
		b.Run(fmt.Sprintf("%s/a=%g,z=%g", p.name, p.a, p.z), func(b *testing.B) {
			for b.Loop() {
				sink = s.LogUpperJet(p.z).DAA
			}
		})
	}
}

func BenchmarkLogUpper(b *testing.B) {
	for _, p := range points {
		b.Run(fmt.Sprintf("%s/a=%g,z=%g", p.name, p.a, p.z), func(b *testing.B) {
			for b.Loop() {
				sink = LogUpper(p.a, p.z)
			}
		})
	}
}

// BenchmarkGonumUpper is the value alone, without derivatives, from gonum.
func BenchmarkGonumUpper(b *testing.B) {
	for _, p := range points {
		b.Run(fmt.Sprintf("%s/a=%g,z=%g", p.name, p.a, p.z), func(b *testing.B) {
			for b.Loop() {
				sink = math.Log(mathext.GammaIncRegComp(p.a, p.z))
			}
		})
	}
}

func BenchmarkShape(b *testing.B) {
	for _, a := range []float64{0.3, 1.2, 4.5, 9.2, 30} {
		b.Run(fmt.Sprintf("a=%g", a), func(b *testing.B) {
			for b.Loop() {
				s := NewShape(a)
				sink = s.tri
			}
		})
	}
}

func BenchmarkInverse(b *testing.B) {
	for _, c := range []struct{ a, p float64 }{{0.01, 0.5}, {0.7, 0.5}, {3, 0.01}, {30, 1e-6}, {1e4, 0.1}} {
		b.Run(fmt.Sprintf("upper/a=%g,q=%g", c.a, c.p), func(b *testing.B) {
			for b.Loop() {
				sink = InverseUpper(c.a, math.Log(c.p))
			}
		})
		b.Run(fmt.Sprintf("gonum/a=%g,q=%g", c.a, c.p), func(b *testing.B) {
			for b.Loop() {
				sink = mathext.GammaIncRegCompInv(c.a, c.p)
			}
		})
	}
}

func BenchmarkPolygamma(b *testing.B) {
	for _, a := range []float64{0.3, 4.5, 30} {
		b.Run(fmt.Sprintf("Digamma/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink = Digamma(a)
			}
		})
		b.Run(fmt.Sprintf("gonum.Digamma/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink = mathext.Digamma(a)
			}
		})
		b.Run(fmt.Sprintf("Trigamma/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink = Trigamma(a)
			}
		})
		b.Run(fmt.Sprintf("gonum.Zeta2/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink = mathext.Zeta(2, a)
			}
		})
		b.Run(fmt.Sprintf("LogGamma/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink = LogGamma(a)
			}
		})
		b.Run(fmt.Sprintf("math.Lgamma/a=%g", a), func(b *testing.B) {
			for b.Loop() {
				sink, _ = math.Lgamma(a)
			}
		})
	}
}
