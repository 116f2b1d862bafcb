//go:build !linux

package parquet

func newSlab() []byte { return make([]byte, slabBytes) }
