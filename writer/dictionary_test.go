package writer

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"

	"nightbook/schema"
)

func dictionary(t *testing.T, format string) string {
	t.Helper()
	var b bytes.Buffer
	if err := Dictionary(&b, format); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// allTables are the tables the dictionary must hold.
func allTables() []schema.Table { return slices.Concat(schema.Inputs, schema.Outputs) }

func allCodes() []schema.CodeDoc {
	return slices.Concat(schema.RejectCodes, schema.NoteCodes, schema.QuoteStatusDocs)
}

func TestDictionaryMarkdown(t *testing.T) {
	text := dictionary(t, "md")
	for _, table := range allTables() {
		if !strings.Contains(text, "\n## "+table.Name+"\n") {
			t.Errorf("table %s is missing", table.Name)
		}
		for _, c := range table.Columns {
			if !strings.Contains(text, "\n| "+c.Name+" | "+c.Type.String()+" |") {
				t.Errorf("%s.%s is missing", table.Name, c.Name)
			}
		}
	}
	if !strings.Contains(text, "\n\nIn CSV files a text that a spreadsheet would take for a formula, ") || !strings.Contains(text, "written as `\\xHH`") {
		t.Error("what CSV files do to texts is missing")
	}
	for _, c := range allCodes() {
		if !strings.Contains(text, "\n| "+c.Code+" | "+c.Doc+" |\n") {
			t.Errorf("code %s is missing", c.Code)
		}
	}
	// In every table all rows must have as many cells as the header.
	cells := 0
	for i, line := range strings.Split(text, "\n") {
		if !strings.HasPrefix(line, "|") {
			cells = 0
			continue
		}
		n := strings.Count(line, "|") - strings.Count(line, `\|`)
		if cells > 0 && n != cells {
			t.Errorf("line %d has %d cells, not %d: %s", i+1, n-1, cells-1, line)
		}
		cells = n
	}
}

func TestDictionaryCSV(t *testing.T) {
	rows, err := csv.NewReader(strings.NewReader(dictionary(t, "csv"))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	at := 1
	for _, part := range []struct {
		name   string
		tables []schema.Table
	}{{"input", schema.Inputs}, {"output", schema.Outputs}} {
		for _, table := range part.tables {
			for _, c := range table.Columns {
				want := []string{table.Name, part.name, c.Name, c.Type.String(), c.Unit, fmt.Sprint(c.Required), c.Default, c.Doc}
				if !slices.Equal(rows[at][:8], want) {
					t.Errorf("row %d is %q, want %q", at, rows[at], want)
				}
				at++
			}
		}
	}
	for _, c := range allCodes() {
		if rows[at][1] != "code" || rows[at][2] != c.Code || rows[at][7] != c.Doc {
			t.Errorf("row %d is %q, want %q", at, rows[at], c.Code)
		}
		at++
	}
	if at != len(rows) {
		t.Errorf("%d rows, want %d", len(rows), at)
	}
}

func TestDictionaryJSON(t *testing.T) {
	type column struct {
		Name, Type, Unit, Meaning string
		Required                  bool
		Default                   string `json:"if_empty"`
		Values                    []string
	}
	type table struct {
		Name, Meaning string
		Columns       []column
	}
	var got struct {
		Inputs, Outputs []table
		RejectCodes     []struct{ Code, Meaning string } `json:"reject_codes"`
		WarningCodes    []struct{ Code, Meaning string } `json:"warning_codes"`
	}
	if err := json.Unmarshal([]byte(dictionary(t, "json")), &got); err != nil {
		t.Fatal(err)
	}
	tables := slices.Concat(got.Inputs, got.Outputs)
	for i, want := range allTables() {
		if tables[i].Name != want.Name || tables[i].Meaning != want.Doc || len(tables[i].Columns) != len(want.Columns) {
			t.Fatalf("table %d is %+v", i, tables[i])
		}
		for k, c := range want.Columns {
			if g := tables[i].Columns[k]; g.Name != c.Name || g.Type != c.Type.String() || g.Unit != c.Unit || g.Required != c.Required || g.Default != c.Default || g.Meaning != c.Doc {
				t.Errorf("%s.%s is %+v", want.Name, c.Name, g)
			}
		}
	}
	if len(got.RejectCodes) != len(schema.RejectCodes) || len(got.WarningCodes) != len(schema.NoteCodes) || got.RejectCodes[0].Code != schema.RejectCodes[0].Code {
		t.Errorf("codes: %+v", got)
	}
}

func TestDictionarySQL(t *testing.T) {
	text := dictionary(t, "sql")
	for _, table := range schema.Outputs {
		body := regexp.MustCompile(`(?s)CREATE TABLE "` + table.Name + `" \(\n(.*?)\n\);`).FindStringSubmatch(text)
		if body == nil {
			t.Fatalf("table %s is missing", table.Name)
		}
		var want []string
		for _, c := range table.Columns {
			line := `    "` + c.Name + `" ` + map[schema.Type]string{
				schema.Text: "text", schema.Float: "double precision", schema.Int: "bigint", schema.Day: "date", schema.Bool: "boolean",
			}[c.Type]
			if c.Required {
				line += " NOT NULL"
			}
			want = append(want, line)
			if !strings.Contains(text, fmt.Sprintf("COMMENT ON COLUMN %q.%q IS '", table.Name, c.Name)) {
				t.Errorf("%s.%s has no comment", table.Name, c.Name)
			}
		}
		if body[1] != strings.Join(want, ",\n") {
			t.Errorf("table %s is\n%s", table.Name, body[1])
		}
	}
	for _, c := range allCodes() {
		if !strings.Contains(text, "('"+c.Code+"', '") {
			t.Errorf("code %s is missing", c.Code)
		}
	}
	// Quotes inside literals are doubled, so that all of them come in pairs.
	if strings.Count(text, "'")%2 != 0 || !strings.Contains(text, "line''s") {
		t.Error("a quote is not escaped")
	}
}

func TestDictionaryFormats(t *testing.T) {
	for _, format := range DictionaryFormats {
		if text := dictionary(t, format); len(text) < 5000 || text != dictionary(t, format) {
			t.Errorf("%s: %d bytes, or other ones the second time", format, len(text))
		}
	}
	if err := Dictionary(&bytes.Buffer{}, "xml"); err == nil {
		t.Error("an unknown format passes unnoticed")
	}
}
