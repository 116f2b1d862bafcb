package reader

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/writer"

	"nightbook/schema"
)

// parquetFile writes rows, structs with the tags of the library, as a Parquet file.
func parquetFile(t testing.TB, rows ...any) string {
	t.Helper()
	var m memory
	w, err := writer.NewParquetWriter(&m, reflect.New(reflect.TypeOf(rows[0])).Interface(), 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range rows {
		if err := w.Write(r); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	return m.String()
}

// typed is a position line whose columns are of types of their own.
type typed struct {
	LineID     int64   `parquet:"name=line_id, type=INT64"`
	Book       string  `parquet:"name=book, type=BYTE_ARRAY, convertedtype=UTF8"`
	Underlying string  `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
	Instrument string  `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
	Quantity   int64   `parquet:"name=quantity, type=INT64"`
	Strike     float64 `parquet:"name=strike, type=DOUBLE"`
	Expiry     int64   `parquet:"name=expiry, type=INT64, logicaltype=TIMESTAMP, logicaltype.isadjustedtoutc=true, logicaltype.unit=MICROS"`
	Booked     int64   `parquet:"name=booked, type=INT64, logicaltype=TIMESTAMP, logicaltype.isadjustedtoutc=false, logicaltype.unit=MICROS"`
	Seen       int64   `parquet:"name=seen, type=INT64, logicaltype=TIMESTAMP, logicaltype.isadjustedtoutc=true, logicaltype.unit=MICROS"`
}

const micros = 1_000_000

// 2026-06-19T15:30:05.25 in microseconds since 1970: day 20623 of Unix time.
const moment20260619 = ((20623*24+15)*3600+30*60+5)*micros + 250_000

// A moment of UTC is no time of the desk's clock: it is refused, unless run.toml
// takes it for one. Columns that are carried through keep it to the last digit.
func TestTimesOfUTC(t *testing.T) {
	file := parquetFile(t, typed{1, "North", "ALBA", "forward", 5, 90, moment20260619, moment20260619, 20623 * 86400 * micros})
	s := mustRead(t, map[string]string{"positions.csv": "", "positions.parquet": file})
	r := s.rejects()
	if len(r) != 1 || r[0].Code != schema.BadDate || r[0].Column != "expiry" || r[0].Value != "2026-06-19T15:30:05.25Z" || !strings.Contains(r[0].Reason, `utc = "as_is"`) {
		t.Errorf("%+v", r)
	}
	s = mustRead(t, map[string]string{"positions.csv": "", "positions.parquet": file, "run.toml": smallest["run.toml"] + "[parquet]\nutc = \"as_is\"\n"})
	b := s.batches[0]
	if len(b.Rejects) > 0 || (schema.Moment{Day: b.Expiry[0], Minute: b.ExpiryMinute[0]}).String() != "2026-06-19T15:30" {
		t.Errorf("taken as they are: %v %v, %+v", b.Expiry, b.ExpiryMinute, b.Rejects)
	}
	if got := b.Extra[0].At(0) + " " + b.Extra[1].At(0); got != "2026-06-19T15:30:05.25 2026-06-19T00:00Z" {
		t.Errorf("carried through: %s", got)
	}
}

// Integers that a double does not hold are ids and no numbers.
func TestLargeIntegers(t *testing.T) {
	row := func(id, quantity int64) any {
		return typed{id, "North", "ALBA", "stock", quantity, 0, 0, 0, 0}
	}
	s := mustRead(t, map[string]string{"positions.csv": "", "run.toml": smallest["run.toml"] + "[parquet]\nutc = \"as_is\"\n", "positions.parquet": parquetFile(t,
		row(1<<53+1, 1<<53), row(math.MaxInt64, 1<<53+1), row(7, math.MaxInt64), row(8, math.MinInt64), row(math.MinInt64, 1), row(9, -1<<62))})
	b := s.batches[0]
	var refused []string
	for _, r := range b.Rejects {
		refused = append(refused, r.Column+" "+r.Value)
	}
	want := "quantity 9007199254740993, quantity 9223372036854775807, quantity -9223372036854775808, line_id -9223372036854775808"
	if got := strings.Join(refused, ", "); got != want {
		t.Errorf("refused: %s, want %s", got, want)
	}
	if got := b.LineID.At(0); got != "9007199254740993" {
		t.Errorf("line_id %s", got)
	}
	if b.Quantity[0] != 1<<53 || b.Quantity[5] != -1<<62 {
		t.Errorf("quantities %v", b.Quantity)
	}
}
