package parquet

import (
	"cmp"
	"encoding/binary"
	"maps"
	"slices"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

var magic = []byte("PAR1")

// formatVersion is that of files with RLE_DICTIONARY pages and logical types.
const formatVersion = 2

// footerInfo is what the footer says besides schema and data.
type footerInfo struct {
	version string
	pairs   map[string]string
}

// writeFooter writes the page index, the footer and the end of the file.
func (p *Writer) writeFooter() error {
	s := newSerializer()
	if err := p.writeIndexes(s); err != nil {
		return err
	}
	// Readers look at name and version to know whether to trust the statistics.
	createdBy := "nightbook version " + cmp.Or(p.meta.version, "unknown")
	footer := &parquet.FileMetaData{
		Version:   formatVersion,
		Schema:    schemaElements(&p.table),
		NumRows:   p.rows,
		RowGroups: p.groups,
		CreatedBy: &createdBy,
	}
	if footer.RowGroups == nil {
		footer.RowGroups = []*parquet.RowGroup{}
	}
	for range p.columns {
		footer.ColumnOrders = append(footer.ColumnOrders, &parquet.ColumnOrder{TYPE_ORDER: parquet.NewTypeDefinedOrder()})
	}
	for _, key := range slices.Sorted(maps.Keys(p.meta.pairs)) {
		value := p.meta.pairs[key]
		footer.KeyValueMetadata = append(footer.KeyValueMetadata, &parquet.KeyValue{Key: key, Value: &value})
	}
	size, err := p.write(s, footer)
	if err != nil {
		return err
	}
	end := binary.LittleEndian.AppendUint32(nil, uint32(size))
	_, err = p.out.Write(append(end, magic...))
	return err
}

// writeIndexes writes the page index: the column indexes of all chunks, then
// their offset indexes.
func (p *Writer) writeIndexes(s *serializer) error {
	at := func(i int) *parquet.ColumnChunk {
		return p.groups[i/len(p.columns)].Columns[i%len(p.columns)]
	}
	for i, x := range p.indexes {
		if x.column == nil {
			continue
		}
		start := p.out.n
		size, err := p.write(s, x.column)
		if err != nil {
			return err
		}
		at(i).ColumnIndexOffset, at(i).ColumnIndexLength = &start, &size
	}
	for i, x := range p.indexes {
		start := p.out.n
		size, err := p.write(s, x.offset)
		if err != nil {
			return err
		}
		at(i).OffsetIndexOffset, at(i).OffsetIndexLength = &start, &size
	}
	return nil
}

func (p *Writer) write(s *serializer, m thrift.TStruct) (int32, error) {
	b, err := s.serialize(m)
	if err != nil {
		return 0, err
	}
	n, err := p.out.Write(b)
	return int32(n), err
}

// schemaElements is the table as the format describes it: a root and its columns.
func schemaElements(t *schema.Table) []*parquet.SchemaElement {
	n := int32(len(t.Columns))
	elements := []*parquet.SchemaElement{{Name: t.Name, NumChildren: &n}}
	for _, c := range t.Columns {
		physical, repetition := physicalType(c.Type), parquet.FieldRepetitionType_OPTIONAL
		if c.Required {
			repetition = parquet.FieldRepetitionType_REQUIRED
		}
		e := &parquet.SchemaElement{Name: c.Name, Type: &physical, RepetitionType: &repetition}
		switch c.Type {
		case schema.Text:
			e.LogicalType = &parquet.LogicalType{STRING: parquet.NewStringType()}
			converted := parquet.ConvertedType_UTF8
			e.ConvertedType = &converted
		case schema.Day:
			e.LogicalType = &parquet.LogicalType{DATE: parquet.NewDateType()}
			converted := parquet.ConvertedType_DATE
			e.ConvertedType = &converted
		}
		elements = append(elements, e)
	}
	return elements
}
