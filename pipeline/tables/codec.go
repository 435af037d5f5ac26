package tables

import (
	"fmt"

	"github.com/klauspost/compress/zstd"
	"github.com/parquet-go/parquet-go/format"
)

// windowBytes is how far back zstd looks. Pages are a quarter of it; the
// library's default of 8 MiB costs 16 MiB of memory for every open table, made
// and cleared again after every garbage collection.
const windowBytes = 1 << 20

// codec is zstd with one encoder that lives as long as the table, at a fixed
// level, window and concurrency: they decide the bytes.
type codec struct{ encoder *zstd.Encoder }

func newCodec() *codec {
	e, err := zstd.NewWriter(nil, zstd.WithEncoderLevel(zstd.SpeedDefault), zstd.WithWindowSize(windowBytes),
		zstd.WithEncoderConcurrency(1), zstd.WithZeroFrames(true), zstd.WithEncoderCRC(false))
	if err != nil {
		panic(fmt.Sprintf("tables: zstd refuses its settings: %v", err))
	}
	return &codec{e}
}

func (*codec) String() string { return "ZSTD" }

// CompressionCodec is how the file names the compression.
func (*codec) CompressionCodec() format.CompressionCodec { return format.Zstd }

// Encode compresses src, writing over dst.
func (c *codec) Encode(dst, src []byte) ([]byte, error) {
	return c.encoder.EncodeAll(src, dst[:0]), nil
}

// Decode is for reading, which goes through parquet-go's own codec.
func (*codec) Decode(dst, src []byte) ([]byte, error) {
	return nil, fmt.Errorf("tables: this codec only writes")
}
