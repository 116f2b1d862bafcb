package vec

import "os"

// tierVariable names the environment variable that forces a tier: scalar, avx2
// or avx512. It is meant for support, to rule the vector code out or to time it;
// the results are the same.
const tierVariable = "NIGHTBOOK_KERNEL"

// tier is a form of the code. A greater one needs more of the processor.
type tier int

const (
	scalar tier = iota
	avx2
	avx512
)

var tierNames = [...]string{scalar: "scalar", avx2: "avx2", avx512: "avx512"}

// active is the tier in use, chosen once before main runs.
var active, tierNote = chooseTier(os.Getenv(tierVariable), bestTier())

// Tier returns the name of the tier in use: "avx512", "avx2" or "scalar".
func Tier() string { return tierNames[active] }

// TierNote says in one line why the tier in use is not the one asked for in
// NIGHTBOOK_KERNEL, and is empty when there is nothing to say.
func TierNote() string { return tierNote }

func chooseTier(asked string, best tier) (tier, string) {
	if asked == "" {
		return best, ""
	}
	for t, name := range tierNames {
		if name != asked {
			continue
		}
		if tier(t) > best {
			return best, tierVariable + "=" + asked + " is not available here; using " + tierNames[best]
		}
		return tier(t), ""
	}
	return best, tierVariable + " should be scalar, avx2 or avx512; using " + tierNames[best]
}
