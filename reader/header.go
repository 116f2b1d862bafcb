package reader

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"nightbook/schema"
)

// binding says which column of a file stands for which of ours.
type binding struct {
	at    []int    // by our column: its place in the file, or -1
	names []string // by our column: as the file names it, or our name where the file has none
	extra []int    // places of columns that are none of ours, in file order
}

// bind finds the columns of t in the header of a file. mapping gives, for some
// of our columns, the house's own header. Headers are compared without regard
// to case and to spaces around them.
func bind(in *input, header []string, mapping map[string]string, limits *schema.Limits) (*binding, error) {
	t := in.table
	b := &binding{at: make([]int, len(t.Columns)), names: make([]string, len(t.Columns))}
	taken := make([]string, len(header)) // by place in the file: our column
	for at, h := range header {
		if len(h) > int(limits.Of(schema.FieldBytes)) {
			return nil, fmt.Errorf("%s: the name of column %d, which begins with %q: %w", in.path, at+1, h[:shown], limits.Exceeded(schema.FieldBytes))
		}
		if !utf8.ValidString(h) {
			return nil, fmt.Errorf("%s: the header %q is not valid UTF-8: save the file as UTF-8, or declare what it is written in under [csv] encoding of %s", in.path, cutShort(h), configName)
		}
	}
	for k := range t.Columns {
		ours := t.Columns[k].Name
		b.at[k], b.names[k] = -1, ours
		theirs, mapped := mapping[ours]
		for at, h := range header {
			mine := strings.EqualFold(h, ours)
			if mapped {
				mine = mine || strings.EqualFold(h, theirs)
			}
			if !mine {
				continue
			}
			if b.at[k] >= 0 {
				return nil, fmt.Errorf("%s: two columns stand for %s: %q and %q; rename one, or map another header in [columns.%s] of %s",
					in.path, ours, header[b.at[k]], h, t.Name, configName)
			}
			if taken[at] != "" {
				return nil, fmt.Errorf("%s: the column %q stands for both %s and %s: map one of them to another header in [columns.%s] of %s",
					in.path, h, taken[at], ours, t.Name, configName)
			}
			b.at[k], b.names[k] = at, h
			taken[at] = ours
		}
		if mapped && (b.at[k] < 0 || !strings.EqualFold(b.names[k], theirs)) {
			return nil, fmt.Errorf("%s: [columns.%s] of %s maps %s to %q, which is not in the header; the columns found are %s",
				in.path, t.Name, configName, ours, theirs, headerList(header))
		}
		if b.at[k] < 0 && t.Columns[k].Required {
			return nil, fmt.Errorf("%s: there is no column %s; the columns found are %s%s; if the file names it otherwise, add %s = \"Its Header\" under [columns.%s] in %s",
				in.path, ours, headerList(header), delimiterHint(header), ours, t.Name, configName)
		}
	}
	for at := range header {
		if taken[at] == "" {
			b.extra = append(b.extra, at)
		}
	}
	return b, nil
}

// splitExtra drops the extra columns without a name and refuses two of one name.
func (b *binding) splitExtra(in *input, header []string) (dropped int, err error) {
	named := b.extra[:0]
	seen := map[string]bool{}
	for _, at := range b.extra {
		h := header[at]
		if h == "" {
			dropped++
			continue
		}
		if fold := strings.ToLower(h); seen[fold] {
			return 0, fmt.Errorf("%s: two columns are named %q: rename one", in.path, h)
		} else {
			seen[fold] = true
		}
		named = append(named, at)
	}
	b.extra = named
	return dropped, nil
}

func (b *binding) extraNames(header []string) []string {
	var names []string
	for _, at := range b.extra {
		names = append(names, header[at])
	}
	return names
}

// delimiterHint speaks up where a whole header has landed in one column.
func delimiterHint(header []string) string {
	if len(header) == 1 {
		for _, d := range []string{";", "\t", "|", ","} {
			if strings.Contains(header[0], d) {
				return fmt.Sprintf(" (all in one: set [csv] delimiter = %q)", d)
			}
		}
	}
	return ""
}

// What a message tells of a header: so many columns, and so many bytes of a name.
const (
	told  = 60
	shown = 100
)

// headerList lists the columns of a file for a message.
func headerList(header []string) string {
	quoted := make([]string, 0, told+1)
	for i, h := range header {
		if i == told {
			quoted = append(quoted, fmt.Sprintf("and %d more", len(header)-told))
			break
		}
		quoted = append(quoted, fmt.Sprintf("%q", cutShort(h)))
	}
	return strings.Join(quoted, " ")
}

// cutShort cuts a name off that is too long for a message.
func cutShort(h string) string {
	if len(h) <= shown {
		return h
	}
	return strings.ToValidUTF8(h[:shown], "") + "…"
}

// emptyNameNote is the warning on columns without a name.
func emptyNameNote(in *input, count int) schema.Note {
	return schema.Note{Code: schema.ColumnEmptyName, Subject: in.name, File: in.name, Count: int64(count),
		Message: "columns without a name in the header were dropped"}
}
