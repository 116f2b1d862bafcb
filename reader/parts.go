package reader

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"net/url"
	"path/filepath"
	"slices"
	"strings"

	"nightbook/reader/parquet"
	"nightbook/reader/table"
	"nightbook/schema"
)

// parts is a table in several Parquet files of one folder, read in the order of
// their names as one. Each folder below it that is named key=value gives the rows
// of its files one column more, unless they have a column of that name.
type parts struct {
	folder *Folder
	in     *input
	cfg    *schema.Config
	list   []part
	keys   []int // of part.keys: those that are columns
	header []string
	schema []string // of every file
	all    int64    // bytes of the files
	memory int64    // that reading takes, where there is a ceiling
	piece  int64    // that a piece keeps of the dictionaries
	texts  int64    // bytes of text in a run of rows that it leaves; 0: any number

	at   int   // the part being read
	past int64 // bytes of those before it
	file *file // nil: it is not open yet
	rows *parquet.File
	read int64 // of its rows
}

// part is one of the files.
type part struct {
	input
	keys, values []string // of the folders it stands in
}

// openParts finds the files and checks that all have the same columns.
func (f *Folder) openParts(in *input, cfg *schema.Config) (*parts, error) {
	p := &parts{folder: f, in: in, cfg: cfg}
	if err := p.find(); err != nil {
		return nil, err
	}
	for i := range p.list {
		x := &p.list[i]
		file, err := x.open(f.ctx)
		if err != nil {
			return nil, err
		}
		var rows *parquet.File
		if err = file.checkContent(); err == nil {
			rows, err = parquet.Open(file, file.size(), cfg.Limits)
		}
		if err != nil {
			return nil, errors.Join(file.fail("", err), file.Close())
		}
		if cfg.Limits.Ceiling() > 0 {
			n, kept, err := rows.Memory()
			if err != nil {
				return nil, errors.Join(file.fail("", err), file.Close())
			}
			p.memory, p.piece = max(p.memory, n), max(p.piece, kept)
		}
		if err := file.Close(); err != nil {
			return nil, err
		}
		p.all += file.size()
		if i == 0 {
			p.schema, p.header = rows.Schema(), slices.Clone(rows.Header())
			continue
		}
		if err := agree(p.schema, rows.Schema()); err != nil {
			return nil, fmt.Errorf("%s: %w, as those of %s: write all files of the folder with one schema", x.path, err, p.list[0].name)
		}
		if !slices.Equal(x.keys, p.list[0].keys) {
			return nil, fmt.Errorf("%s: it stands in folders for %s, %s in folders for %s: name the folders alike", x.path, listedKeys(x.keys), p.list[0].name, listedKeys(p.list[0].keys))
		}
	}
	for k, key := range p.list[0].keys {
		if !slices.ContainsFunc(p.header, func(h string) bool { return strings.EqualFold(h, key) }) {
			p.keys, p.header = append(p.keys, k), append(p.header, key)
		}
	}
	return p, nil
}

// agree returns how the columns of a file differ from those of the first.
func agree(first, other []string) error {
	for k := range max(len(first), len(other)) {
		switch {
		case k >= len(other):
			return fmt.Errorf("it has %d columns and not %d", len(other), len(first))
		case k >= len(first) || first[k] != other[k]:
			want := "the end"
			if k < len(first) {
				want = first[k]
			}
			return fmt.Errorf("its column %d is %s and not %s", k+1, other[k], want)
		}
	}
	return nil
}

// find lists the files of the folder and of those below it.
func (p *parts) find() error {
	root := p.in.path + string(filepath.Separator) // so that it may be a link
	err := filepath.WalkDir(root, func(path string, e fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if path == root {
			return p.folder.ctx.Err()
		}
		// What engines leave beside the data, _SUCCESS and the like, and hidden files.
		if name := e.Name(); name[0] == '_' || name[0] == '.' {
			if e.IsDir() {
				return fs.SkipDir
			}
			return nil
		}
		if e.IsDir() {
			return nil
		}
		if !strings.EqualFold(filepath.Ext(path), ".parquet") {
			return fmt.Errorf("%s: not a .parquet file, and a folder of Parquet files holds nothing else: take it out", path)
		}
		if int64(len(p.list)) == p.cfg.Limits.Of(schema.Parts) {
			return p.in.fail("", p.cfg.Limits.Exceeded(schema.Parts))
		}
		below, err := filepath.Rel(p.in.path, path)
		if err != nil {
			return err
		}
		x := part{input: input{path: path, name: p.in.name + "/" + filepath.ToSlash(below), table: p.in.table, format: p.in.format}}
		for _, dir := range strings.Split(filepath.ToSlash(filepath.Dir(below)), "/") {
			if key, value, ok := strings.Cut(dir, "="); ok {
				if key = unescaped(key); slices.ContainsFunc(x.keys, func(k string) bool { return strings.EqualFold(k, key) }) {
					return fmt.Errorf("%s: it stands in two folders that give %s a value: leave one", path, key)
				}
				x.keys, x.values = append(x.keys, key), append(x.values, unescaped(value))
			}
		}
		p.list = append(p.list, x)
		return nil
	})
	if err == nil && len(p.list) == 0 {
		err = fmt.Errorf("%s: the folder holds no .parquet file: put the parts there, or take it away", p.in.path)
	}
	return err
}

// listedKeys joins the keys of a file's folders for an error.
func listedKeys(keys []string) string {
	if len(keys) == 0 {
		return "no column"
	}
	return strings.Join(keys, ", ")
}

// unescaped returns a key or value as it was before it became the name of a folder.
func unescaped(name string) string {
	if name == "__HIVE_DEFAULT_PARTITION__" { // what engines write for null
		return ""
	}
	if text, err := url.PathUnescape(name); err == nil {
		return text
	}
	return name
}

// Header returns the names of the columns.
func (p *parts) Header() []string { return p.header }

// Next reads the next rows, all of one part.
func (p *parts) Next(into *table.Rows) error {
	for p.at < len(p.list) {
		x := &p.list[p.at]
		if p.file == nil {
			if err := p.openPart(x); err != nil {
				return err
			}
		}
		err := p.rows.Next(into)
		if err == nil {
			p.read += int64(into.N)
			into.File = x.name
			for _, k := range p.keys {
				into.AppendColumn(x.values[k], meant(x.values[k]))
			}
			return nil
		}
		if err != io.EOF {
			return p.file.fail("", err)
		}
		if err := p.file.done(p.folder, p.read); err != nil {
			return err
		}
		p.past += p.file.size()
		err = p.file.Close()
		if p.at, p.file, p.read = p.at+1, nil, 0; err != nil {
			return err
		}
	}
	return io.EOF
}

func (p *parts) openPart(x *part) error {
	file, err := x.open(p.folder.ctx)
	if err != nil {
		return err
	}
	p.file = file
	if err = file.hashAll(); err == nil {
		p.rows, err = parquet.Open(file, file.size(), p.cfg.Limits)
	}
	if err != nil {
		return file.fail("", err)
	}
	if p.texts > 0 {
		p.rows.LimitTexts(p.cfg.Limits.Ceiling(), p.texts)
	}
	if agree(p.schema, p.rows.Schema()) != nil { // it was another file when the folder was opened
		return fmt.Errorf("%s: %w", x.path, errChanged)
	}
	return nil
}

// meant says what the text of a folder's name stands for: engines write numbers
// and dates there in their own style, not in the house's.
func meant(text string) table.Cell {
	if _, ok := parseNumber([]byte(text)); ok {
		return table.Number
	}
	if _, _, why := isoDate.parse([]byte(text)); why == nil {
		return table.Date
	}
	return table.Text
}

func (p *parts) size() int64 { return p.all }

func (p *parts) reached() int64 {
	if p.file == nil {
		return p.past
	}
	return p.past + int64(p.rows.Read()*float64(p.file.size()))
}

// fail has nothing to add: the errors of parts name their file.
func (p *parts) fail(_ string, err error) error { return err }

// done has nothing to do: each part was put into the inputs at its end.
func (p *parts) done(*Folder, int64) error { return nil }

// Close closes the part that is open.
func (p *parts) Close() error {
	if p.file == nil {
		return nil
	}
	return p.file.Close()
}
