package reader

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"nightbook/schema"
)

// Folder is a snapshot folder: its files by the table they hold, and what has
// been read of them.
type Folder struct {
	ctx    context.Context
	dir    string
	tables map[string]*input

	held int64 // bytes that the market takes, about

	mu     sync.Mutex
	inputs []schema.InputFile
	notes  []schema.Note
}

// neededTables are those a run cannot do without.
var neededTables = []string{"positions", "underlyings", "rates"}

// OpenFolder finds the tables of the snapshot folder dir by the stems of their
// files, compared without regard to case. It is an error if one of the needed
// tables is missing (by default those of a run), if two files hold the same table, or if the file of a
// table is in a form that is not read. Other data files are noted as not used. Reading from the
// folder ends with ctx.
func OpenFolder(ctx context.Context, dir string, needed ...string) (*Folder, error) {
	if len(needed) == 0 {
		needed = neededTables
	}
	entries, err := os.ReadDir(dir)
	if err != nil {
		return nil, fmt.Errorf("snapshot folder: %w: give the folder that holds the positions, the market and %s", err, configName)
	}
	f := &Folder{ctx: ctx, dir: dir, tables: map[string]*input{}}
	var files, foreign []string
	for _, e := range entries {
		// Hidden files, and those an open workbook leaves beside itself, are nobody's data.
		if strings.HasPrefix(e.Name(), ".") || strings.HasPrefix(e.Name(), "~$") {
			continue
		}
		info, err := os.Stat(filepath.Join(dir, e.Name()))
		parted := err == nil && info.IsDir()
		if parted && !strings.EqualFold(filepath.Ext(e.Name()), ".parquet") {
			stem, rest := stemOf(e.Name())
			if _, known := formatOf(rest); known && inputTable(stem) != nil {
				return nil, fmt.Errorf("%s: it is a folder: only positions.parquet may be one; write %s as one file", filepath.Join(dir, e.Name()), stem)
			}
			files = append(files, e.Name()+"/") // of the house's own
			continue
		}
		files = append(files, e.Name())
		read, err := f.add(e.Name(), parted)
		if err != nil {
			return nil, err
		}
		if !read {
			foreign = append(foreign, e.Name())
		}
	}
	for _, name := range foreign {
		// A copy beside the file is harmless; a table there is only in a form that
		// is not read must not be passed over.
		stem, rest := stemOf(name)
		if f.tables[stem] == nil {
			return nil, fmt.Errorf("%s: a file of the form %s is not read: save it as one of %s, or name it so if it is one", filepath.Join(dir, name), rest, strings.Join(formatNames(), ", "))
		}
		f.note(unused(name))
	}
	for _, table := range needed {
		if f.tables[table] == nil {
			return nil, fmt.Errorf("%s: there is no %s file: put it there, or name it so: %s.csv (or %s); the folder holds %s",
				dir, table, table, strings.Join(formatNames()[1:], ", "), listed(files))
		}
	}
	return f, nil
}

// add gives the file its place in the folder. read is false for a file that is
// named like a table and is in a form that is not read.
func (f *Folder) add(name string, parted bool) (read bool, err error) {
	if strings.EqualFold(name, configName) {
		if name != configName {
			return true, fmt.Errorf("%s: the configuration must be named %s", filepath.Join(f.dir, name), configName)
		}
		return true, nil
	}
	stem, rest := stemOf(name)
	form, known := formatOf(rest)
	table := inputTable(stem)
	switch {
	case table == nil && known:
		f.note(unused(name))
	case table == nil:
	case !known:
		return false, nil
	case f.tables[stem] != nil:
		return true, fmt.Errorf("%s: both %s and %s hold %s: leave one", f.dir, f.tables[stem].name, name, stem)
	case parted && stem != "positions":
		return true, fmt.Errorf("%s: only the positions may be a folder of Parquet files: write %s as one file", filepath.Join(f.dir, name), stem)
	default:
		f.tables[stem] = &input{path: filepath.Join(f.dir, name), name: name, table: table, format: form, parted: parted}
	}
	return true, nil
}

// stemOf parts a file's name, in small letters, before its first point.
func stemOf(name string) (stem, suffix string) {
	name = strings.ToLower(name)
	if i := strings.IndexByte(name, '.'); i >= 0 {
		return name[:i], name[i:]
	}
	return name, ""
}

func unused(name string) schema.Note {
	return schema.Note{Code: schema.FileNotUsed, Subject: name, File: name, Count: 1,
		Message: "this version does not use the file; the tables it reads are " + strings.Join(inputNames(), ", ")}
}

// FileOf returns the name of the file that holds a table, "" where there is none.
func (f *Folder) FileOf(table string) string {
	if in := f.tables[table]; in != nil {
		return in.name
	}
	return ""
}

// name returns the name of the folder itself, which may be its date.
func (f *Folder) name() string {
	if abs, err := filepath.Abs(f.dir); err == nil {
		return filepath.Base(abs)
	}
	return filepath.Base(f.dir)
}

// Inputs returns the files read to their end, sorted by name.
func (f *Folder) Inputs() []schema.InputFile {
	f.mu.Lock()
	defer f.mu.Unlock()
	out := slices.Clone(f.inputs)
	slices.SortFunc(out, func(a, b schema.InputFile) int { return strings.Compare(a.Name, b.Name) })
	return out
}

// Notes returns the warnings on the files read so far, in the order met.
func (f *Folder) Notes() []schema.Note {
	f.mu.Lock()
	defer f.mu.Unlock()
	return slices.Clone(f.notes)
}

// record puts a file read to its end into Inputs; the last reading counts.
func (f *Folder) record(in schema.InputFile) {
	f.mu.Lock()
	defer f.mu.Unlock()
	if i := slices.IndexFunc(f.inputs, func(x schema.InputFile) bool { return x.Name == in.Name }); i >= 0 {
		f.inputs[i] = in
		return
	}
	f.inputs = append(f.inputs, in)
}

// note adds a warning unless it is there already.
func (f *Folder) note(n schema.Note) {
	f.mu.Lock()
	defer f.mu.Unlock()
	if !slices.Contains(f.notes, n) {
		f.notes = append(f.notes, n)
	}
}

// inputTable returns the table of that name, or nil.
func inputTable(name string) *schema.Table {
	for i := range schema.Inputs {
		if schema.Inputs[i].Name == name {
			return &schema.Inputs[i]
		}
	}
	return nil
}

func inputNames() []string {
	var names []string
	for i := range schema.Inputs {
		names = append(names, schema.Inputs[i].Name)
	}
	return names
}

// listed joins names for an error.
func listed(names []string) string {
	if len(names) == 0 {
		return "no files"
	}
	return strings.Join(names, ", ")
}

// errNotRegular is given for a table that is no plain file: a run reads what
// lies on disk, twice if need be.
var errNotRegular = errors.New("not a regular file, but a pipe, a device or a folder: write what it holds to a file")
