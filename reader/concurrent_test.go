package reader

import (
	"context"
	"fmt"
	"io"
	"strings"
	"sync"
	"testing"

	"nightbook/schema"
)

// Several binders at once, with pieces and batches going round, read what one
// reads with fresh ones.
func TestBindersAtOnce(t *testing.T) {
	text := desk(5*schema.BatchRows+123, 17)
	// Some rows to refuse, and some quotation marks, so that blocks grow while they are decoded.
	lines := strings.Split(text, "\n")
	for i := 7; i < len(lines); i += 101 {
		lines[i] = strings.Replace(lines[i], ",carry,", `,"say ""carry""",`, 1)
		if i%5 == 0 {
			lines[i] = strings.Replace(lines[i], "option", "swap", 1)
		}
	}
	text = strings.Join(lines, "\n")
	header, rows := faultyDesk(5*schema.BatchRows+123, 17)
	for _, c := range []struct{ name, file string }{
		{"positions.csv", text}, {"positions.csv.zst", zstandard(t, text)}, {"positions.parquet", parquetOf(t, desk(2*schema.BatchRows+50, 17))},
		{"positions.parquet", laid(t, textColumns(header), inGroups(rows), layouts["some of each"])},
	} {
		name := c.name
		over := map[string]string{"positions.csv": ""}
		over[name] = c.file
		dir := folderOf(t, over)
		once, err := readAll(dir)
		if err != nil {
			t.Fatal(err)
		}
		want := content(once) + fmt.Sprint(once.rejects())
		if got := atOnce(t, dir); got != want {
			t.Errorf("%s: reads otherwise", name)
		}
	}
}

// atOnce reads a folder with three binders, four pieces and four batches.
func atOnce(t *testing.T, dir string) string {
	f, err := OpenFolder(context.Background(), dir)
	if err != nil {
		t.Fatal(err)
	}
	cfg, err := f.Config("")
	if err != nil {
		t.Fatal(err)
	}
	dicts := schema.NewDicts()
	p, err := f.Positions(cfg, dicts)
	if err != nil {
		t.Fatal(err)
	}
	defer p.Close()
	type job struct {
		n  int
		pc *Piece
	}
	jobs, free := make(chan job), make(chan *Piece, 4)
	for range cap(free) {
		free <- new(Piece)
	}
	var mu sync.Mutex
	parts := map[int]string{}
	rejects := map[int][]schema.Reject{}
	var wg sync.WaitGroup
	for range 3 {
		wg.Add(1)
		go func() {
			defer wg.Done()
			binder := p.NewBinder()
			var b schema.Batch
			for j := range jobs {
				if err := binder.Bind(j.pc, &b); err != nil {
					t.Error(err)
				}
				free <- j.pc // before the batch is used: it has what it needs
				text := content(&snapshot{dicts: dicts, batches: []*schema.Batch{&b}})
				mu.Lock()
				parts[j.n] = text
				rejects[j.n] = append([]schema.Reject(nil), b.Rejects...)
				mu.Unlock()
			}
		}()
	}
	n := 0
	last := int64(0)
	for {
		pc := <-free
		err := p.Next(pc)
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if pc.Bytes < last || pc.Bytes > p.Size() || pc.Rows == 0 {
			t.Errorf("piece of %d rows ends at %d of %d, after %d", pc.Rows, pc.Bytes, p.Size(), last)
		}
		last = pc.Bytes
		jobs <- job{n, pc}
		n++
	}
	close(jobs)
	wg.Wait()
	if last != p.Size() {
		t.Errorf("the last piece ends at %d of %d", last, p.Size())
	}
	var all strings.Builder
	var refused []schema.Reject
	for i := range n {
		all.WriteString(parts[i])
		refused = append(refused, rejects[i]...)
	}
	return all.String() + fmt.Sprint(refused)
}

// Next goes on saying that the file has ended.
func TestEndStays(t *testing.T) {
	p := positionsOf(t, folderOf(t, nil))
	var pc Piece
	if err := p.Next(&pc); err != nil || pc.Rows != 1 || p.Rows() != 1 {
		t.Fatal(err, pc.Rows)
	}
	for range 3 {
		if err := p.Next(&pc); err != io.EOF {
			t.Error(err)
		}
	}
}

// In the steady state no memory is asked for, however many rows a piece has.
func TestBindAllocations(t *testing.T) {
	text := desk(40*schema.BatchRows, 9)
	header, rows := cellsOf(text)
	coded := laid(t, textColumns(header), [][][]string{rows}, func(_, column int, c []string) chunk {
		if column == 0 {
			return chunk{page: 1 << 20}
		}
		return chunk{different(c, 0), len(c), 1 << 20}
	})
	for _, over := range []map[string]string{{"positions.csv": text}, {"positions.csv": "", "positions.parquet": coded}} {
		bindAllocations(t, over)
	}
}

func bindAllocations(t *testing.T, over map[string]string) {
	p := positionsOf(t, folderOf(t, over))
	binder := p.NewBinder()
	var pc Piece
	var b schema.Batch
	step := func() {
		if err := p.Next(&pc); err != nil {
			t.Fatal(err)
		}
		if err := binder.Bind(&pc, &b); err != nil {
			t.Fatal(err)
		}
	}
	for range 8 {
		step()
	}
	// What is left is a few slices of pointers in Batch.Resize, none of them by row.
	if n := testing.AllocsPerRun(20, step); n > 30 {
		t.Errorf("%v allocations a batch of %d rows", n, schema.BatchRows)
	}
}
