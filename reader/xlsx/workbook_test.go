package xlsx

import (
	"archive/zip"
	"bytes"
	"fmt"
	"io"
	"os"
	"strings"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"

	"nightbook/reader/table"
	"nightbook/schema"
)

// book writes a workbook with a general workbook library.
func book(t testing.TB, fill func(*excelize.File)) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	fill(f)
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

var marks = map[table.Cell]string{table.Text: "t", table.Number: "n", table.Percent: "p", table.Date: "d", table.Fault: "!"}

// rendered reads a workbook whole: a line a row, with its number and the kind
// of each cell before its text.
func rendered(b []byte) (header []string, lines []string, err error) {
	w, err := Open(bytes.NewReader(b), int64(len(b)), schema.Limits{})
	if err != nil {
		return nil, nil, err
	}
	var run table.Rows
	for {
		err := w.Next(&run)
		if err == io.EOF {
			return w.Header(), lines, nil
		}
		if err != nil {
			return nil, nil, err
		}
		bad := map[int]string{}
		for _, x := range run.Bad {
			bad[x.Row] = " BAD " + x.Reason
		}
		for i := range run.N {
			line := fmt.Sprint(run.Line[i])
			for c := range run.Cols {
				text := string(run.AppendText(nil, c, i))
				if text == "" {
					line += "|"
					continue
				}
				line += "|" + marks[run.Cell(c, i)] + ":" + text
			}
			lines = append(lines, line+bad[i])
		}
	}
}

func check(t *testing.T, b []byte, header string, want ...string) {
	t.Helper()
	h, lines, err := rendered(b)
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(h, "|"); got != header {
		t.Errorf("header %q, want %q", got, header)
	}
	if got, want := strings.Join(lines, "\n"), strings.Join(want, "\n"); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

func TestCells(t *testing.T) {
	b := book(t, func(f *excelize.File) {
		f.SetSheetRow("Sheet1", "A2", &[]any{" Name ", "value", "", "date"}) // row 1 is empty
		f.SetSheetRow("Sheet1", "A3", &[]any{"plain", 0.1, nil, nil})
		f.SetSheetRow("Sheet1", "A4", &[]any{"123", 123, "x", true})
		f.SetSheetRow("Sheet1", "A6", &[]any{"tiny & <big>", 1e-9, 12345678901.5, false}) // row 5 is empty
		f.SetCellValue("Sheet1", "B7", 1.0/3)                                             // the library writes 15 digits
		f.SetCellValue("Sheet1", "D7", time.Date(2026, 3, 20, 15, 30, 59, 0, time.UTC))
		f.SetCellValue("Sheet1", "D8", time.Date(2026, 3, 20, 0, 0, 0, 0, time.UTC))
		percent, _ := f.NewStyle(&excelize.Style{NumFmt: 10})
		f.SetCellValue("Sheet1", "B9", 0.2)
		f.SetCellStyle("Sheet1", "B9", "B9", percent)
		own := "dd/mm/yyyy\\ hh:mm"
		date, _ := f.NewStyle(&excelize.Style{CustomNumFmt: &own})
		f.SetCellValue("Sheet1", "D10", 46101.75)
		f.SetCellStyle("Sheet1", "D10", "D10", date)
		f.SetCellValue("Sheet1", "A11", "beyond")
		f.SetCellValue("Sheet1", "F11", "remark")
		f.SetCellRichText("Sheet1", "A12", []excelize.RichTextRun{{Text: "two "}, {Text: "runs"}})
	})
	check(t, b, "Name|value||date",
		"3|t:plain|n:0.1||",
		"4|t:123|n:123|t:x|t:true",
		"6|t:tiny & <big>|n:1e-09|n:12345678901.5|t:false",
		"7||n:0.333333333333333||d:2026-03-20T15:30",
		"8||||d:2026-03-20",
		"9||p:0.2||",
		"10||||d:2026-03-20T18:00",
		"11|t:beyond||| BAD there is a cell in column F, which has no header: name the column or empty the cell",
		"12|t:two runs|||",
	)
}

func TestDate1904(t *testing.T) {
	yes := true
	b := book(t, func(f *excelize.File) {
		f.SetWorkbookProps(&excelize.WorkbookPropsOptions{Date1904: &yes})
		date, _ := f.NewStyle(&excelize.Style{NumFmt: 14})
		f.SetCellValue("Sheet1", "A1", "d")
		for i, serial := range []float64{1, 44639, 44639.5} {
			cell := fmt.Sprintf("A%d", i+2)
			f.SetCellValue("Sheet1", cell, serial)
			f.SetCellStyle("Sheet1", cell, cell, date)
		}
	})
	check(t, b, "d", "2|d:1904-01-02", "3|d:2026-03-20", "4|d:2026-03-20T12:00")
}

// handmade packs a workbook of one sheet out of its XML.
func handmade(t testing.TB, sheet string, over map[string]string) []byte {
	t.Helper()
	const head = `<?xml version="1.0" encoding="UTF-8"?>`
	const main = `xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main" xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships"`
	const rel = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
	parts := []struct{ name, text string }{
		{"_rels/.rels", `<Relationships><Relationship Id="r1" Type="` + rel + `/officeDocument" Target="/xl/workbook.xml"/></Relationships>`},
		{"xl/workbook.xml", `<workbook ` + main + `><sheets><sheet name="Lines" sheetId="1" r:id="rId7"/><sheet name="Other" sheetId="2" r:id="rId8"/></sheets></workbook>`},
		{"xl/_rels/workbook.xml.rels", `<Relationships><Relationship Id="rId7" Type="` + rel + `/worksheet" Target="worksheets/a.xml"/><Relationship Id="rId9" Type="` + rel + `/styles" Target="styles.xml"/><Relationship Id="rId10" Type="` + rel + `/sharedStrings" Target="sharedStrings.xml"/></Relationships>`},
		{"xl/styles.xml", `<styleSheet ` + main + `><numFmts><numFmt numFmtId="164" formatCode="[Red]0.00;&quot;d&quot;0"/><numFmt numFmtId="165" formatCode="[h]:mm"/></numFmts><cellXfs><xf numFmtId="0"/><xf numFmtId="14"/><xf numFmtId="164"/><xf numFmtId="165"/></cellXfs></styleSheet>`},
		{"xl/sharedStrings.xml", `<sst ` + main + `><si><t>shared</t></si><si><r><t>ri</t></r><r><t xml:space="preserve">ch </t></r><rPh sb="0" eb="1"><t>phonetic</t></rPh></si><si><t>line_x000D_end</t></si></sst>`},
		{"xl/worksheets/a.xml", `<worksheet ` + main + `>` + sheet + `</worksheet>`},
	}
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	for _, p := range parts {
		text := p.text
		if o, ok := over[p.name]; ok {
			text = o
		}
		w, err := z.Create(p.name)
		if err != nil {
			t.Fatal(err)
		}
		io.WriteString(w, head+text)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// Cells as other programs write them: with and without addresses, formulas,
// errors, inline and rich texts, times without a date.
func TestHandmade(t *testing.T) {
	const sheet = `<cols><col min="1" max="1"/></cols><sheetData>
<row><c t="inlineStr"><is><t>a</t></is></c><c t="inlineStr"><is><r><t>b</t></r><r><t>2</t></r></is></c><c t="str"><f>x</f><v>c</v></c></row>
<row r="3"><c r="A3" t="s"><v>0</v></c><c r="C3" t="s"><v>1</v></c></row>
<row r="4"><c r="A4" t="e"><v>#N/A</v></c><c r="B4"><f>1+1</f><v>2</v></c><c r="C4"><f>B4*2</f></c></row>
<row r="5"><c r="A5" s="1"><v>46101</v></c><c r="B5" s="2"><v>46101</v></c><c r="C5" s="3"><v>0.5</v></c></row>
<row r="6"><c r="A6" t="d"><v>2026-03-20T15:30:00.000</v></c><c r="B6" t="b"><v>1</v></c><c r="C6" t="str"><f>""</f><v></v></c></row>
<row r="7"><c r="A7" s="1"><v>59</v></c><c r="B7" s="1"><v>60</v></c><c r="C7" s="1"><v>61</v></c></row>
<row r="8" hidden="1"><c r="A8" s="0"/><c r="B8" t="s"><v>2</v></c></row>
<row r="9"><c r="A9" s="1"/></row>
</sheetData><x:anchor xmlns:x="urn:x"><x:row>4</x:row></x:anchor>`
	check(t, handmade(t, sheet, nil), "a|b2|c",
		"3|t:shared||t:rich ",
		"4|!:#N/A|n:2|!:=B4*2",
		"5|d:2026-03-20|n:46101|n:0.5",
		"6|d:2026-03-20T15:30:00|t:true|",
		"7|d:1900-02-28|n:60|d:1900-03-01",
		"8||t:line\rend|",
	)
}

// What a damaged or odd workbook is refused for.
func TestErrors(t *testing.T) {
	row := func(s string) string {
		return `<sheetData><row><c t="inlineStr"><is><t>a</t></is></c></row>` + s + `</sheetData>`
	}
	whole := handmade(t, row(`<row r="2"><c r="A2"><v>1</v></c></row>`), nil)
	for _, c := range []struct {
		name string
		b    []byte
		want string
	}{
		{"too short", []byte("PK"), "not a workbook"},
		{"password", append([]byte("\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1"), make([]byte, 100)...), "protected by a password"},
		{"cut short", whole[:len(whole)-40], "damaged"},
		{"no sheet", handmade(t, "", map[string]string{"xl/workbook.xml": "<workbook/>"}), "no sheet"},
		{"sheet missing", handmade(t, "", map[string]string{"xl/_rels/workbook.xml.rels": "<Relationships/>"}), "is missing"},
		{"chart sheet", handmade(t, "", map[string]string{"xl/_rels/workbook.xml.rels": `<Relationships><Relationship Id="rId7" Type="x/chartsheet" Target="c.xml"/></Relationships>`}), "holds no cells"},
		{"empty", handmade(t, "<sheetData/>", nil), "the sheet is empty"},
		{"no end", handmade(t, row("")[:60], nil), "damaged"},
		{"shared text", handmade(t, row(`<row r="2"><c t="s"><v>9</v></c></row>`), nil), `shared text "9" of 3`},
		{"number", handmade(t, row(`<row r="2"><c><v>1,5</v></c></row>`), nil), `a cell's number is "1,5"`},
		{"type", handmade(t, row(`<row r="2"><c t="zz"><v>1</v></c></row>`), nil), `unknown type "zz"`},
		{"row order", handmade(t, row(`<row r="3"/><row r="2"/>`), nil), "row 2 follows row 3"},
		{"column order", handmade(t, row(`<row r="3"><c r="B3"><v>1</v></c><c r="A3"><v>1</v></c></row>`), nil), "out of order"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, _, err := rendered(c.b)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("%v, want %q", err, c.want)
			}
		})
	}
}

// A byte of the sheet changed on disk is found out by the package's checksum.
func TestChecksum(t *testing.T) {
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	packed := handmade(t, `<sheetData><row><c t="inlineStr"><is><t>a</t></is></c></row><row><c><v>12345</v></c></row></sheetData>`, nil)
	src, err := zip.NewReader(bytes.NewReader(packed), int64(len(packed)))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range src.File {
		w, err := z.CreateHeader(&zip.FileHeader{Name: f.Name, Method: zip.Store})
		if err != nil {
			t.Fatal(err)
		}
		r, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		io.Copy(w, r)
	}
	z.Close()
	whole := b.Bytes()
	if _, _, err := rendered(whole); err != nil {
		t.Fatal(err)
	}
	whole[bytes.Index(whole, []byte("12345"))] = '9'
	if _, lines, err := rendered(whole); err == nil {
		t.Errorf("reads well: %v", lines)
	}
}

func TestKindOfCode(t *testing.T) {
	for code, want := range map[string]table.Cell{
		"yyyy-mm-dd": table.Date, "d/m/yy": table.Date, "[$-409]h:mm AM/PM": table.Date, "[hh]:mm": table.Date, `"day" 0`: table.Number, "0.00": table.Number, "General": table.Number,
		`0.00_d`: table.Number, `\d0`: table.Number, "[Red]0": table.Number, "0;yyyy": table.Number, "#,##0 [$USD]": table.Number, `"open`: table.Number, "[open": table.Number, "": table.Number, "GENERAL": table.Number,
		"0%": table.Percent, "[Red]#,##0.00 %;-0": table.Percent, `0"%"`: table.Number, `0\%`: table.Number, "0;0%": table.Number,
	} {
		if got := kindOfCode(code); got != want {
			t.Errorf("kindOfCode(%q) = %v, want %v", code, got, want)
		}
	}
}

func TestColumnNames(t *testing.T) {
	for n := range maxColumns {
		if got := columnNumber(columnName(n) + "7"); got != n {
			t.Fatalf("%s is column %d, want %d", columnName(n), got, n)
		}
	}
}

// A workbook of an office program, with formulas it has computed itself.
func TestOfficeWorkbook(t *testing.T) {
	b, err := os.ReadFile("testdata/office.xlsx")
	if err != nil {
		t.Fatal(err)
	}
	check(t, b, "line_id|strike|expiry|vol|note",
		"2|t:L1|n:12.5|d:2026-06-19|p:0.2|t:so, \"it\" goes",
		"3|t:L2|n:25|d:2026-06-20|n:0.25|",
		"4|t:L3|!:#DIV/0!||n:0.3|t:ä€",
	)
}

// A workbook cut short at any byte never reads well.
func TestTruncated(t *testing.T) {
	office, err := os.ReadFile("testdata/office.xlsx")
	if err != nil {
		t.Fatal(err)
	}
	plain := book(t, func(f *excelize.File) {
		f.SetSheetRow("Sheet1", "A1", &[]any{"id", "n"})
		f.SetSheetRow("Sheet1", "A2", &[]any{"one", 1})
	})
	for _, whole := range [][]byte{office, plain} {
		if _, _, err := rendered(whole); err != nil {
			t.Fatal(err)
		}
		for n := range whole {
			if _, _, err := rendered(whole[:n]); err == nil {
				t.Errorf("cut to %d of %d bytes it reads well", n, len(whole))
			}
		}
	}
}

func FuzzXLSX(f *testing.F) {
	f.Add(handmade(f, `<sheetData><row><c t="inlineStr"><is><t>a</t></is></c></row><row r="5"><c r="A5" s="1"><v>46101.5</v></c></row></sheetData>`, nil))
	f.Add(book(f, func(x *excelize.File) {
		x.SetSheetRow("Sheet1", "A1", &[]any{"a", "b"})
		x.SetSheetRow("Sheet1", "A2", &[]any{1.5, "x"})
	}))
	f.Fuzz(func(t *testing.T, b []byte) {
		header, lines, err := rendered(b)
		if err == nil && len(header) == 0 {
			t.Errorf("no header and no error, %d rows", len(lines))
		}
	})
}

// FuzzSheet changes the sheet rather than the package around it.
func FuzzSheet(f *testing.F) {
	for _, s := range []string{
		`<sheetData><row><c t="inlineStr"><is><t>a</t></is></c></row><row r="5"><c r="A5" s="1"><v>46101.5</v></c></row></sheetData>`,
		`<sheetData><row><c t="s"><v>1</v></c></row><row r="5"><c r="A5"><f>A1</f></c><c t="e"><v>#N/A</v></c></row></sheetData>`,
	} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		header, lines, err := rendered(handmade(t, s, nil))
		if err == nil && len(header) == 0 {
			t.Errorf("no header and no error, %d rows", len(lines))
		}
	})
}

// FuzzTexts changes the shared texts and the styles that cells refer to.
func FuzzTexts(f *testing.F) {
	const main = `xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"`
	f.Add(`<sst `+main+`><si><t>one</t></si><si><r><t>t</t></r><rPh><t>x</t></rPh><r><t>wo_x0041_</t></r></si></sst>`,
		`<styleSheet `+main+`><numFmts><numFmt numFmtId="164" formatCode="[h]:mm"/></numFmts><cellXfs><xf numFmtId="164"/><xf numFmtId="10"/></cellXfs></styleSheet>`)
	f.Fuzz(func(t *testing.T, texts, styles string) {
		header, lines, err := rendered(handmade(t, `<sheetData><row><c t="s"><v>0</v></c><c t="inlineStr"><is><t>b</t></is></c></row><row><c t="s"><v>1</v></c><c s="0"><v>46101.5</v></c></row><row><c s="1"><v>0.5</v></c></row></sheetData>`,
			map[string]string{"xl/sharedStrings.xml": texts, "xl/styles.xml": styles}))
		if err == nil && (len(header) == 0 || len(lines) == 0) {
			t.Errorf("no header or no rows, and no error: %q %q", header, lines)
		}
	})
}
