//go:build !(goexperiment.simd && amd64)

package american

// Without vector code a block has one lane.

func lanes() int { return 1 }

func column(n int) []float64 { return make([]float64, n) }

func (n *nodes) interpolate(dst, f []float64, _ int) { n.interpolateGeneric(dst, f) }

func (s *block) guess()              { s.guessGeneric() }
func (s *block) approach()           { s.approachGeneric() }
func (s *block) arrive()             { s.arriveGeneric() }
func (s *block) decays()             { s.decaysGeneric() }
func (s *block) distances()          { s.distancesGeneric() }
func (s *block) tails()              { s.tailsGeneric() }
func (s *block) linearise(last bool) { s.lineariseGeneric(last) }
func (s *block) eliminate(last bool) { s.eliminateGeneric(last) }
func (s *block) advance()            { s.advanceGeneric() }
func (s *block) bend()               { s.bendGeneric() }
func (s *block) resolve()            { s.resolveGeneric() }
func (s *block) curveExponents()     { s.curveExponentsGeneric() }
func (s *block) curveTangents()      { s.curveTangentsGeneric() }
func (s *block) priceDistances()     { s.priceDistancesGeneric() }
func (s *block) nearDistances()      { s.nearDistancesGeneric() }
func (s *block) priceTails()         { s.priceTailsGeneric() }
func (s *block) values()             { s.valuesGeneric() }
func (s *block) refine()             { s.refineGeneric() }
