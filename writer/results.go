package writer

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
)

// The manifest is what tells a folder of results from any other.
const (
	program      = "nightbook"
	manifestName = "manifest.json"
)

// checkResults returns ErrNotResults unless dir holds a manifest of this
// program and, beside it, nothing but plain files that the manifest lists.
func checkResults(dir string) error {
	entries, err := os.ReadDir(dir)
	if err != nil {
		return err
	}
	for _, e := range entries {
		if !e.Type().IsRegular() {
			return fmt.Errorf("%w: it holds %s", ErrNotResults, e.Name())
		}
	}
	data, err := os.ReadFile(filepath.Join(dir, manifestName))
	if errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("%w: it holds no %s", ErrNotResults, manifestName)
	}
	if err != nil {
		return err
	}
	var m struct {
		Program string
		Outputs []struct{ Name string }
	}
	if err := json.Unmarshal(data, &m); err != nil || m.Program != program {
		return fmt.Errorf("%w: its %s is of another program", ErrNotResults, manifestName)
	}
	allowed := []string{manifestName}
	for _, file := range m.Outputs {
		allowed = append(allowed, file.Name)
	}
	for _, e := range entries {
		if !slices.Contains(allowed, e.Name()) {
			return fmt.Errorf("%w: it holds %s", ErrNotResults, e.Name())
		}
	}
	return nil
}
