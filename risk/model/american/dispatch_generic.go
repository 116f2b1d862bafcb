package american

func spread(dst, weights, f []float64, n, width int) { spreadGeneric(dst, weights, f, n) }
func (s *block) guess()                              { s.guessGeneric() }
func (s *block) approach()                           { s.approachGeneric() }
func (s *block) arrive()                             { s.arriveGeneric() }
func (s *block) distances()                          { s.distancesGeneric() }
func (s *block) tails()                              { s.tailsGeneric() }
func (s *block) linearise()                          { s.lineariseGeneric() }
func (s *block) eliminate()                          { s.eliminateGeneric() }
func (s *block) advance()                            { s.advanceGeneric() }
func (s *block) bend()                               { s.bendGeneric() }
func (s *block) resolve()                            { s.resolveGeneric() }
func (s *block) curveExponents()                     { s.curveExponentsGeneric() }
func (s *block) curveTangents()                      { s.curveTangentsGeneric() }
func (s *block) priceDistances()                     { s.priceDistancesGeneric() }
func (s *block) priceTails()                         { s.priceTailsGeneric() }
func (s *block) nearDistances()                      { s.nearDistancesGeneric() }
func (s *block) refine()                             { s.refineGeneric() }
func (s *block) values()                             { s.valuesGeneric() }
func aligned(n int) []float64                        { return make([]float64, n) }
func lanes() int                                     { return 1 }
