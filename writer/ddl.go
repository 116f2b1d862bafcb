package writer

import (
	"bytes"
	"fmt"
	"strings"

	"nightbook/schema"
)

// sqlTypes are the types of standard SQL that PostgreSQL knows, too.
var sqlTypes = map[schema.Type]string{
	schema.Text:  "text",
	schema.Float: "double precision",
	schema.Int:   "bigint",
	schema.Day:   "date",
	schema.Bool:  "boolean",
}

// dictionarySQL writes the statements that make the written tables, and two
// small tables with the meanings of the codes.
func dictionarySQL(b *bytes.Buffer) {
	fmt.Fprintf(b, "-- Tables of a run, revision %d. Columns of the position file that are carried\n-- through stand behind the others in lines, as text: add them before loading.\n", schema.Revision)
	for _, t := range schema.Outputs {
		fmt.Fprintf(b, "\nCREATE TABLE %s (\n", identifier(t.Name))
		for i, c := range t.Columns {
			null, comma := "", ","
			if c.Required {
				null = " NOT NULL"
			}
			if i == len(t.Columns)-1 {
				comma = ""
			}
			fmt.Fprintf(b, "    %s %s%s%s\n", identifier(c.Name), sqlTypes[c.Type], null, comma)
		}
		b.WriteString(");\n")
		fmt.Fprintf(b, "COMMENT ON TABLE %s IS %s;\n", identifier(t.Name), literal(t.Doc))
		for _, c := range t.Columns {
			doc := c.Doc
			if c.Unit != "" {
				doc += " [" + c.Unit + "]"
			}
			fmt.Fprintf(b, "COMMENT ON COLUMN %s.%s IS %s;\n", identifier(t.Name), identifier(c.Name), literal(doc))
		}
	}
	for _, list := range codeLists {
		fmt.Fprintf(b, "\nCREATE TABLE %s (\n    \"code\" text NOT NULL PRIMARY KEY,\n    \"meaning\" text NOT NULL\n);\n", identifier(list.name))
		fmt.Fprintf(b, "COMMENT ON TABLE %s IS %s;\n", identifier(list.name), literal("closed list: "+list.title))
		fmt.Fprintf(b, "INSERT INTO %s (\"code\", \"meaning\") VALUES\n", identifier(list.name))
		for i, c := range list.codes {
			end := ","
			if i == len(list.codes)-1 {
				end = ";"
			}
			fmt.Fprintf(b, "    (%s, %s)%s\n", literal(c.Code), literal(c.Doc), end)
		}
	}
}

// identifier quotes a name: column, row and others are words of the language.
func identifier(name string) string { return `"` + strings.ReplaceAll(name, `"`, `""`) + `"` }

func literal(s string) string { return "'" + strings.ReplaceAll(s, "'", "''") + "'" }
