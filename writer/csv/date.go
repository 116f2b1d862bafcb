package csv

import (
	"encoding/binary"

	"nightbook/schema"
)

const (
	march0000 = 719_468   // from 0000-03-01 to 1970-01-01
	year10000 = 2_932_897 // 10000-01-01
)

// putDate writes d as YYYY-MM-DD, and returns the length of the text, which is
// another for years of other than four digits.
//
// Method: C. Neri and L. Schneider, "Euclidean affine functions and their
// application to calendar algorithms" (2022), figure 12.
func putDate(s *slot, d schema.Date) int {
	if d < -march0000 || d >= year10000 {
		return copy(s[:], d.AppendDate(nil))
	}
	n := uint32(d+march0000)*4 + 3
	century := n / 146097
	p := 2939745 * uint64(n%146097|3)
	day := uint32(p) / (2939745 * 4) // of a year that begins in March
	m := 2141*day + 197913
	year, month := 100*century+uint32(p>>32), m>>16
	if day >= 306 {
		year, month = year+1, month-12
	}
	day = m&0xffff/2141 + 1
	binary.LittleEndian.PutUint64(s[:], uint64(twoDigits(year/100))|uint64(twoDigits(year%100))<<16|'-'<<32|uint64(twoDigits(month))<<40|'-'<<56)
	binary.LittleEndian.PutUint16(s[8:], uint16(twoDigits(day)))
	return 10
}

func twoDigits(n uint32) uint32 { return n/10 + n%10<<8 + '0'*0x101 }
