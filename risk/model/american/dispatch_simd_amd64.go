//go:build goexperiment.simd && amd64

package american

import (
	"unsafe"

	"nightbook/risk/vec"
)

// A block has as many lanes as a vector of the tier in use.

// lanes returns the width of a block.
func lanes() int {
	switch vec.Tier() {
	case "avx512":
		return width8
	case "avx2":
		return width4
	}
	return 1
}

// column returns n zeros that start on a cache line: a vector that lies on two
// costs twice.
func column(n int) []float64 {
	const line = 64 / 8
	room := make([]float64, n+line)
	skip := -uintptr(unsafe.Pointer(unsafe.SliceData(room))) & 63 / 8
	return room[skip:][:n]
}

func (n *nodes) interpolate(dst, f []float64, width int) {
	switch width {
	case width8:
		n.interpolate8(dst, f)
	case width4:
		n.interpolate4(dst, f)
	default:
		n.interpolateGeneric(dst, f)
	}
}

func (s *block) guess() {
	switch s.width {
	case width8:
		s.guess8()
	case width4:
		s.guess4()
	default:
		s.guessGeneric()
	}
}

func (s *block) approach() {
	switch s.width {
	case width8:
		s.approach8()
	case width4:
		s.approach4()
	default:
		s.approachGeneric()
	}
}

func (s *block) arrive() {
	switch s.width {
	case width8:
		s.arrive8()
	case width4:
		s.arrive4()
	default:
		s.arriveGeneric()
	}
}

func (s *block) decays() {
	switch s.width {
	case width8:
		s.decays8()
	case width4:
		s.decays4()
	default:
		s.decaysGeneric()
	}
}

func (s *block) distances() {
	switch s.width {
	case width8:
		s.distances8()
	case width4:
		s.distances4()
	default:
		s.distancesGeneric()
	}
}

func (s *block) tails() {
	switch s.width {
	case width8:
		s.tails8()
	case width4:
		s.tails4()
	default:
		s.tailsGeneric()
	}
}

func (s *block) linearise(last bool) {
	switch s.width {
	case width8:
		s.linearise8(last)
	case width4:
		s.linearise4(last)
	default:
		s.lineariseGeneric(last)
	}
}

func (s *block) eliminate(last bool) {
	switch s.width {
	case width8:
		s.eliminate8(last)
	case width4:
		s.eliminate4(last)
	default:
		s.eliminateGeneric(last)
	}
}

func (s *block) advance() {
	switch s.width {
	case width8:
		s.advance8()
	case width4:
		s.advance4()
	default:
		s.advanceGeneric()
	}
}

func (s *block) bend() {
	switch s.width {
	case width8:
		s.bend8()
	case width4:
		s.bend4()
	default:
		s.bendGeneric()
	}
}

func (s *block) resolve() {
	switch s.width {
	case width8:
		s.resolve8()
	case width4:
		s.resolve4()
	default:
		s.resolveGeneric()
	}
}

func (s *block) curveExponents() {
	switch s.width {
	case width8:
		s.curveExponents8()
	case width4:
		s.curveExponents4()
	default:
		s.curveExponentsGeneric()
	}
}

func (s *block) curveTangents() {
	switch s.width {
	case width8:
		s.curveTangents8()
	case width4:
		s.curveTangents4()
	default:
		s.curveTangentsGeneric()
	}
}

func (s *block) priceDistances() {
	switch s.width {
	case width8:
		s.priceDistances8()
	case width4:
		s.priceDistances4()
	default:
		s.priceDistancesGeneric()
	}
}

func (s *block) nearDistances() {
	switch s.width {
	case width8:
		s.nearDistances8()
	case width4:
		s.nearDistances4()
	default:
		s.nearDistancesGeneric()
	}
}

func (s *block) priceTails() {
	switch s.width {
	case width8:
		s.priceTails8()
	case width4:
		s.priceTails4()
	default:
		s.priceTailsGeneric()
	}
}

func (s *block) values() {
	switch s.width {
	case width8:
		s.values8()
	case width4:
		s.values4()
	default:
		s.valuesGeneric()
	}
}

func (s *block) refine() {
	switch s.width {
	case width8:
		s.refine8()
	case width4:
		s.refine4()
	default:
		s.refineGeneric()
	}
}
