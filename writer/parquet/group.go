package parquet

import (
	"github.com/xitongsys/parquet-go/parquet"
)

// group is a row group: its finished pages, until they are in the file.
type group struct {
	rows   int64
	chunks []chunk
}

// newGroup starts a row group. There are two of them at most, of which one is
// written while the other fills.
func (p *Writer) newGroup() *group {
	g := p.spare
	if p.spare = nil; g == nil {
		g = &group{chunks: make([]chunk, len(p.columns))}
		for i, c := range p.columns {
			g.chunks[i].name, g.chunks[i].physical, g.chunks[i].blocks = c.Name, c.physical, p.blocks
		}
	}
	for i, c := range p.columns {
		c.chunk = &g.chunks[i]
	}
	return g
}

// flush ends the row group, and lets it be written while the next one fills.
func (p *Writer) flush() error {
	err := p.each(func(i int, s *scratch) error { return p.columns[i].finish(s) })
	if err != nil {
		return err
	}
	if err := p.settle(); err != nil {
		return err
	}
	g, done := p.group, make(chan error, 1)
	g.rows = p.groupRows
	p.blocks.setWriting(true)
	go func() { done <- p.writeGroup(g) }()
	p.writing, p.written, p.group = g, done, nil
	p.rows += p.groupRows
	p.groupRows, p.groupHeld = 0, 0
	return nil
}

// settle waits until the row group that is being written is in the file.
func (p *Writer) settle() error {
	if p.writing == nil {
		return nil
	}
	p.spare, p.writing = p.writing, nil
	return <-p.written
}

func (p *Writer) writeGroup(g *group) error {
	defer func() {
		for i := range g.chunks {
			g.chunks[i].reset()
		}
		p.blocks.setWriting(false)
	}()
	meta := &parquet.RowGroup{NumRows: g.rows}
	start := p.out.n
	for i := range g.chunks {
		chunk, index, err := g.chunks[i].write(&p.out)
		if err != nil {
			return err
		}
		g.chunks[i].reset()
		packed, err := index.packed(p.thrift)
		if err != nil {
			return err
		}
		meta.TotalByteSize += chunk.MetaData.TotalUncompressedSize
		meta.Columns = append(meta.Columns, chunk)
		p.indexes = append(p.indexes, packed)
	}
	size := p.out.n - start
	meta.FileOffset, meta.TotalCompressedSize = &start, &size
	if n := len(p.groups); n < 1<<15 {
		ordinal := int16(n)
		meta.Ordinal = &ordinal
	}
	p.groups = append(p.groups, meta)
	return nil
}
