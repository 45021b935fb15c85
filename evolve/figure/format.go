package figure

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Formats lists the extensions that Draw writes.
func Formats() []string { return []string{".pdf", ".png", ".svg"} }

// formatOf is the format of a path, by its extension in either case.
func formatOf(path string) (string, error) {
	ext := strings.ToLower(filepath.Ext(path))
	if !slices.Contains(Formats(), ext) {
		return "", fmt.Errorf("figure: %s: no format has the extension %q: end the name in %s", path, filepath.Ext(path), strings.Join(Formats(), ", "))
	}
	return ext, nil
}

// render draws p and gives the file's bytes.
func render(p *picture, format string, dpi int) (data []byte, err error) {
	// The PDF canvas panics if it cannot write the font to the directory for
	// temporary files.
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("figure: drawing %s: %v: see that the directory for temporary files (TMPDIR) can be written", format, r)
		}
	}()
	var out bytes.Buffer
	switch format {
	case ".png":
		c := vgimg.NewWith(vgimg.UseWH(p.width, p.height), vgimg.UseDPI(dpi))
		p.draw(c)
		_, err = vgimg.PngCanvas{Canvas: c}.WriteTo(&out)
		data = withResolution(out.Bytes(), dpi)
	case ".svg":
		c := vgsvg.NewWith(vgsvg.UseWH(p.width, p.height), vgsvg.EmbedFonts(true))
		p.draw(c)
		_, err = c.WriteTo(&out)
		// Programs that ignore embedded fonts shall take one of the same widths.
		data = bytes.ReplaceAll(out.Bytes(), []byte("font-family:Liberation Sans;"),
			[]byte("font-family:'Liberation Sans',Arial,Helvetica,sans-serif;"))
	default:
		c := vgpdf.New(p.width, p.height) // embeds its font
		p.draw(c)
		_, err = c.WriteTo(&out)
		data = undated(out.Bytes())
	}
	if err != nil {
		return nil, fmt.Errorf("figure: drawing %s: %w", format, err)
	}
	return data, nil
}

// withResolution adds the pHYs chunk (PNG specification, third edition,
// 11.3.4.3), without which a page takes the picture for several times its size.
func withResolution(png []byte, dpi int) []byte {
	const header = 8 + 25 // signature and IHDR
	if len(png) < header {
		return png
	}
	perMetre := uint32(float64(dpi)/0.0254 + 0.5)
	body := []byte("pHYs")
	body = binary.BigEndian.AppendUint32(body, perMetre)
	body = binary.BigEndian.AppendUint32(body, perMetre)
	body = append(body, 1) // the unit is the metre
	chunk := binary.BigEndian.AppendUint32(nil, uint32(len(body)-4))
	chunk = append(chunk, body...)
	chunk = binary.BigEndian.AppendUint32(chunk, crc32.ChecksumIEEE(body))
	return slices.Concat(png[:header], chunk, png[header:])
}

var pdfDate = regexp.MustCompile(`/(CreationDate|ModDate) \(D:\d{14}\)`)

// undated sets the dates of a PDF to a fixed one of the same length, so that
// offsets into the file stay right.
func undated(pdf []byte) []byte {
	return pdfDate.ReplaceAll(pdf, []byte("/$1 (D:20000101000000)"))
}

// points converts centimetres to the unit of drawing.
func points(cm float64) vg.Length { return vg.Length(cm) * vg.Centimeter }

// writeFile replaces path by data in one step: what is there stays whole until
// the new file is complete, and a failure leaves no new file.
func writeFile(path string, data []byte) (err error) {
	dir := filepath.Dir(path)
	f, err := os.CreateTemp(dir, ".figure.tmp-*")
	if err != nil {
		return fmt.Errorf("figure: %s: %w: see that its directory exists and can be written", path, err)
	}
	defer func() {
		if err != nil {
			f.Close()
			os.Remove(f.Name())
			err = fmt.Errorf("figure: %s: %w", path, err)
		}
	}()
	if _, err = f.Write(data); err != nil {
		return err
	}
	if err = f.Chmod(0o644); err != nil {
		return err
	}
	if err = f.Sync(); err != nil {
		return err
	}
	if err = f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), path)
}
