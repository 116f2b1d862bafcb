package main

import (
	"encoding/json"
	"errors"
	"io"
	"os/exec"
	"path"
	"slices"
	"strings"
	"testing"
)

// layers are the rules of who may import whom, within the module and, where it
// matters, outside it. A package stands under the longest pattern it matches; it
// may import what its pattern lists, and packages at or below its own folder.
var layers = []struct {
	pattern string
	may     []string
}{
	{"schema", nil},
	{"reader", []string{"schema"}},
	{"reader/csv", []string{"schema", "reader/table"}},
	{"reader/parquet", []string{"schema", "reader/table"}},
	{"reader/xlsx", []string{"schema", "reader/table"}},
	{"reader/table", []string{"schema"}},
	{"risk", []string{"schema"}},
	{"risk/vec", nil},
	{"risk/model", []string{"risk/vec"}},
	{"risk/instrument", []string{"risk/model", "risk/vec"}},
	{"risk/market", []string{"schema", "risk/vec"}},
	{"risk/aggregate", []string{"schema"}},
	{"risk/internal", nil},
	{"writer", []string{"schema"}},
	{"writer/csv", []string{"schema"}},
	{"writer/parquet", []string{"schema"}},
	{"writer/xlsx", []string{"schema"}},
	{"writer/report", []string{"schema", "writer/xlsx"}},
	{"samples", []string{"schema", "samples"}},
	{"cmd", []string{"schema", "reader", "risk", "writer", "samples"}},
}

// formats are the libraries that only the packages of a format may import.
var formats = map[string][]string{
	"github.com/xitongsys/parquet-go": {"reader/parquet", "writer/parquet"},
	"github.com/xuri/excelize/v2":     {"reader/xlsx", "writer/xlsx", "writer/report"},
	"github.com/urfave/cli/v2":        {"cmd"},
	"github.com/BurntSushi/toml":      {"reader"},
}

func under(pkg, folder string) bool { return pkg == folder || strings.HasPrefix(pkg, folder+"/") }

func TestLayers(t *testing.T) {
	const module = "nightbook/"
	cmd := exec.Command("go", "list", "-json=ImportPath,Imports", "nightbook/...")
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	seen := 0
	for dec := json.NewDecoder(strings.NewReader(string(out))); ; {
		var p struct {
			ImportPath string
			Imports    []string
		}
		if err := dec.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		pkg := strings.TrimPrefix(p.ImportPath, module)
		rule := -1
		for i, l := range layers {
			if under(pkg, l.pattern) && (rule < 0 || len(l.pattern) > len(layers[rule].pattern)) {
				rule = i
			}
		}
		if rule < 0 {
			t.Errorf("%s stands in no layer: give it one", pkg)
			continue
		}
		seen++
		for _, imp := range p.Imports {
			if own, ok := strings.CutPrefix(imp, module); ok {
				if !under(own, pkg) && !slices.ContainsFunc(layers[rule].may, func(m string) bool { return under(own, m) }) {
					t.Errorf("%s may not import %s", pkg, own)
				}
				continue
			}
			for lib, homes := range formats {
				if under(imp, lib) && !slices.ContainsFunc(homes, func(h string) bool { return under(pkg, h) }) {
					t.Errorf("%s may not import %s: it belongs to %s", pkg, imp, strings.Join(homes, ", "))
				}
			}
		}
		switch base := path.Base(pkg); base {
		case "util", "utils", "common", "types", "helpers":
			t.Errorf("%s: a package is named after what it is about", pkg)
		}
	}
	if seen < 10 {
		t.Fatalf("go list told of %d packages only: the rules were not tried", seen)
	}
}
