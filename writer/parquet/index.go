package parquet

import (
	"github.com/xitongsys/parquet-go/parquet"
)

// pageIndex is what the page index of a file tells about one column chunk.
type pageIndex struct {
	column *parquet.ColumnIndex // nil where the bounds of a page are not known
	offset *parquet.OffsetIndex
}

func newPageIndex() pageIndex {
	return pageIndex{
		column: &parquet.ColumnIndex{BoundaryOrder: parquet.BoundaryOrder_UNORDERED},
		offset: &parquet.OffsetIndex{},
	}
}

// add notes a data page that stands at an offset of the file and begins with a
// row of the row group.
func (x *pageIndex) add(p *page, at, row int64) {
	x.offset.PageLocations = append(x.offset.PageLocations, &parquet.PageLocation{
		Offset: at, CompressedPageSize: int32(p.size), FirstRowIndex: row,
	})
	b := &p.bounds
	if !b.known && b.values > 0 {
		x.column = nil
	}
	if x.column == nil {
		return
	}
	x.column.NullPages = append(x.column.NullPages, b.values == 0)
	x.column.MinValues = append(x.column.MinValues, b.min)
	x.column.MaxValues = append(x.column.MaxValues, b.max)
	x.column.NullCounts = append(x.column.NullCounts, int64(b.nulls))
}

// packedIndex is a pageIndex as it goes into the file: a run of many row groups
// keeps the index of every page until its end.
type packedIndex struct{ column, offset []byte }

func (x *pageIndex) packed(s *serializer) (p packedIndex, err error) {
	if x.column != nil {
		if p.column, err = s.serialize(x.column); err != nil {
			return p, err
		}
	}
	p.offset, err = s.serialize(x.offset)
	return p, err
}

// writeIndexes writes the page index: the column indexes of all chunks, then
// their offset indexes.
func (p *Writer) writeIndexes() error {
	at := func(i int) *parquet.ColumnChunk {
		return p.groups[i/len(p.columns)].Columns[i%len(p.columns)]
	}
	for i, x := range p.indexes {
		if len(x.column) == 0 {
			continue
		}
		start := p.out.n
		if _, err := p.out.Write(x.column); err != nil {
			return err
		}
		size := int32(len(x.column))
		at(i).ColumnIndexOffset, at(i).ColumnIndexLength = &start, &size
	}
	for i, x := range p.indexes {
		start := p.out.n
		if _, err := p.out.Write(x.offset); err != nil {
			return err
		}
		size := int32(len(x.offset))
		at(i).OffsetIndexOffset, at(i).OffsetIndexLength = &start, &size
	}
	return nil
}
