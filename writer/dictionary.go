package writer

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"strconv"
	"strings"

	"nightbook/schema"
)

// DictionaryFormats are the names that Dictionary knows.
var DictionaryFormats = []string{"md", "csv", "json", "sql"}

// Dictionary writes the data dictionary: the columns of every file that is
// read and of every table that is written, and the closed lists of codes. In
// format sql it is the statements that make the written tables in a warehouse.
func Dictionary(w io.Writer, format string) error {
	var b bytes.Buffer
	var err error
	switch format {
	case "md":
		dictionaryMarkdown(&b)
	case "csv":
		err = dictionaryCSV(&b)
	case "json":
		err = dictionaryJSON(&b)
	case "sql":
		dictionarySQL(&b)
	default:
		return fmt.Errorf("dictionary format %q: must be one of %s", format, strings.Join(DictionaryFormats, ", "))
	}
	if err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}

// codeLists are the closed lists of codes with the names they go by.
var codeLists = []struct {
	name, title string
	codes       []schema.CodeDoc
}{
	{"reject_codes", "reasons for refusing a row", schema.RejectCodes},
	{"warning_codes", "warnings", schema.NoteCodes},
	{"quote_statuses", "what can become of a quote", schema.QuoteStatusDocs},
}

// words gives the values of a closed list, to stand behind the meaning of a
// column; "" where the column has none.
func words(column string) string {
	list := schema.ChoicesOf(column)
	if list == nil {
		return ""
	}
	return strings.Join(list[1:], ", ")
}

// csvTexts says how a text of a CSV file may differ from the text it stands for.
const csvTexts = "In CSV files a text that a spreadsheet would take for a formula, that is one that begins, after any apostrophes, with `=`, `+`, `-`, `@`, a tab or a line break and is no plain number, has an apostrophe before it, unless `guard_formulas = false` stands under `[csv]` of run.toml." +
	" Each NUL, and each byte that is not UTF-8, is written as `\\xHH`, such as `\\xE9` in the columns value and row of rejects."

func dictionaryMarkdown(b *bytes.Buffer) {
	cell := func(s string) string { return strings.ReplaceAll(s, "|", `\|`) }
	fmt.Fprintf(b, "# Data dictionary\n\nRevision %d of the result tables.\n\n", schema.Revision)
	b.WriteString("# What is read\n")
	for _, t := range schema.Inputs {
		fmt.Fprintf(b, "\n## %s\n\n%s\n\n| column | type | unit | required | if empty | meaning |\n|---|---|---|---|---|---|\n", t.Name, sentence(t.Doc))
		for _, c := range t.Columns {
			required := ""
			if c.Required {
				required = "yes"
			}
			fmt.Fprintf(b, "| %s | %s | %s | %s | %s | %s |\n", c.Name, c.Type, cell(c.Unit), required, cell(c.Default), cell(c.Doc))
		}
	}
	b.WriteString("\n# What is written\n\n" + csvTexts + "\n")
	for _, t := range schema.Outputs {
		fmt.Fprintf(b, "\n## %s\n\n%s\n\n| column | type | unit | null | meaning | values |\n|---|---|---|---|---|---|\n", t.Name, sentence(t.Doc))
		for _, c := range t.Columns {
			null := "may be"
			if c.Required {
				null = "never"
			}
			fmt.Fprintf(b, "| %s | %s | %s | %s | %s | %s |\n", c.Name, c.Type, cell(c.Unit), null, cell(c.Doc), cell(words(c.Name)))
		}
	}
	for _, list := range codeLists {
		fmt.Fprintf(b, "\n# %s\n\n| code | meaning |\n|---|---|\n", strings.ReplaceAll(list.name, "_", " "))
		for _, c := range list.codes {
			fmt.Fprintf(b, "| %s | %s |\n", c.Code, cell(c.Doc))
		}
	}
}

// sentence makes a sentence of the words of a dictionary entry.
func sentence(s string) string {
	if s == "" {
		return ""
	}
	return strings.ToUpper(s[:1]) + s[1:] + "."
}

func dictionaryCSV(b *bytes.Buffer) error {
	w := csv.NewWriter(b)
	w.Write([]string{"table", "part", "column", "type", "unit", "required", "if_empty", "meaning", "values"})
	for _, part := range []struct {
		name   string
		tables []schema.Table
	}{{"input", schema.Inputs}, {"output", schema.Outputs}} {
		for _, t := range part.tables {
			for _, c := range t.Columns {
				values := ""
				if part.name == "output" {
					values = words(c.Name)
				}
				w.Write([]string{t.Name, part.name, c.Name, c.Type.String(), c.Unit, strconv.FormatBool(c.Required), c.Default, c.Doc, values})
			}
		}
	}
	for _, list := range codeLists {
		for _, c := range list.codes {
			w.Write([]string{list.name, "code", c.Code, "", "", "", "", c.Doc, ""})
		}
	}
	w.Flush()
	return w.Error()
}

type dictionaryTable struct {
	Name    string             `json:"name"`
	Meaning string             `json:"meaning"`
	Columns []dictionaryColumn `json:"columns"`
}

type dictionaryColumn struct {
	Name     string   `json:"name"`
	Type     string   `json:"type"`
	Unit     string   `json:"unit,omitempty"`
	Required bool     `json:"required"`
	Default  string   `json:"if_empty,omitempty"`
	Meaning  string   `json:"meaning"`
	Values   []string `json:"values,omitempty"`
}

type dictionaryCode struct {
	Code    string `json:"code"`
	Meaning string `json:"meaning"`
}

func dictionaryJSON(b *bytes.Buffer) error {
	tables := func(list []schema.Table, values bool) []dictionaryTable {
		var out []dictionaryTable
		for _, t := range list {
			d := dictionaryTable{Name: t.Name, Meaning: t.Doc}
			for _, c := range t.Columns {
				e := dictionaryColumn{c.Name, c.Type.String(), c.Unit, c.Required, c.Default, c.Doc, nil}
				if choices := schema.ChoicesOf(c.Name); values && choices != nil {
					e.Values = choices[1:]
				}
				d.Columns = append(d.Columns, e)
			}
			out = append(out, d)
		}
		return out
	}
	codes := func(list []schema.CodeDoc) []dictionaryCode {
		var out []dictionaryCode
		for _, c := range list {
			out = append(out, dictionaryCode{c.Code, c.Doc})
		}
		return out
	}
	e := json.NewEncoder(b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(struct {
		Revision      int               `json:"schema_revision"`
		Inputs        []dictionaryTable `json:"inputs"`
		Outputs       []dictionaryTable `json:"outputs"`
		RejectCodes   []dictionaryCode  `json:"reject_codes"`
		WarningCodes  []dictionaryCode  `json:"warning_codes"`
		QuoteStatuses []dictionaryCode  `json:"quote_statuses"`
	}{schema.Revision, tables(schema.Inputs, false), tables(schema.Outputs, true), codes(schema.RejectCodes), codes(schema.NoteCodes), codes(schema.QuoteStatusDocs)})
}
