package parquet

import (
	"cmp"
	"encoding/binary"
	"maps"
	"slices"

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
	if err := p.writeIndexes(); err != nil {
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
	b, err := p.thrift.serialize(footer)
	if err != nil {
		return err
	}
	b = binary.LittleEndian.AppendUint32(b, uint32(len(b)))
	_, err = p.out.Write(append(b, magic...))
	return err
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
