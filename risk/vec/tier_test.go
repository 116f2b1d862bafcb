package vec_test

import (
	"os"
	"os/exec"
	"slices"
	"strings"
	"testing"

	"nightbook/risk/vec"
)

func TestChooseTier(t *testing.T) {
	for _, c := range []struct{ asked, best, tier, note string }{
		{"", "avx512", "avx512", ""},
		{"", "scalar", "scalar", ""},
		{"scalar", "avx512", "scalar", ""},
		{"avx2", "avx512", "avx2", ""},
		{"avx512", "avx512", "avx512", ""},
		{"avx512", "avx2", "avx2", "NIGHTBOOK_KERNEL=avx512 is not available here; using avx2"},
		{"avx2", "scalar", "scalar", "NIGHTBOOK_KERNEL=avx2 is not available here; using scalar"},
		{"AVX2", "avx512", "avx512", "NIGHTBOOK_KERNEL should be scalar, avx2 or avx512; using avx512"},
		{"sse", "avx2", "avx2", "NIGHTBOOK_KERNEL should be scalar, avx2 or avx512; using avx2"},
	} {
		if tier, note := vec.ChooseTier(c.asked, c.best); tier != c.tier || note != c.note {
			t.Errorf("asked %q of %q: %q, %q; want %q, %q", c.asked, c.best, tier, note, c.tier, c.note)
		}
	}
}

// The environment decides before anything runs, so it takes a process to see it.
func TestTierFromEnvironment(t *testing.T) {
	if os.Getenv("VEC_TEST_PRINT_TIER") != "" {
		os.Stdout.WriteString("tier " + vec.Tier() + "; note " + vec.TierNote() + ";\n")
		os.Exit(0)
	}
	best := vec.Tiers()[len(vec.Tiers())-1]
	for _, asked := range []string{"", "scalar", "avx2", "avx512", "mmx"} {
		cmd := exec.Command(os.Args[0], "-test.run=^TestTierFromEnvironment$")
		cmd.Env = append(os.Environ(), "VEC_TEST_PRINT_TIER=1", "NIGHTBOOK_KERNEL="+asked)
		out, err := cmd.CombinedOutput()
		if err != nil {
			t.Fatalf("%v\n%s", err, out)
		}
		want, silent := best, asked == ""
		if slices.Contains(vec.Tiers(), asked) {
			want, silent = asked, true
		}
		if !strings.Contains(string(out), "tier "+want+"; note ") || strings.Contains(string(out), "note ;") != silent {
			t.Errorf("asked %q: %s", asked, out)
		}
	}
}

// The best tier is in use unless the environment says otherwise.
func TestTierInUse(t *testing.T) {
	if os.Getenv("NIGHTBOOK_KERNEL") != "" {
		t.Skip("a tier is forced")
	}
	if best := vec.Tiers()[len(vec.Tiers())-1]; vec.Tier() != best || vec.TierNote() != "" {
		t.Errorf("tier %q, note %q; best is %q", vec.Tier(), vec.TierNote(), best)
	}
	t.Logf("tier %s of %v", vec.Tier(), vec.Tiers())
}
