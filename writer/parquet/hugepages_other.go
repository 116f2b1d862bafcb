//go:build !linux

package parquet

func hugePages([]byte) {}
