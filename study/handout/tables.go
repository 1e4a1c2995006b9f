package handout

import (
	"archive/zip"
	"bytes"
	"encoding/csv"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"
)

// sheet is a table for a spreadsheet: a heading with its unit for each
// column, and texts, whole numbers, numbers and truth values in the rows.
type sheet struct {
	name    string // of the CSV file and of the sheet
	columns []string
	rows    [][]any
}

func (s *sheet) add(values ...any) { s.rows = append(s.rows, values) }

// sheets lists the tables of the handout.
func sheets(doc *Results) []*sheet {
	return []*sheet{
		aboutSheet(doc), busSheet(doc), limitSheet(doc), currentSheet(doc), measureSheet(doc), inputSheet(doc),
	}
}

// states lists what the document holds, with the word for the State column.
func (r *Results) states() (list []struct {
	word  string
	state *State
}) {
	for _, s := range []struct {
		word  string
		state *State
	}{{"before", r.Before}, {"after", r.After}} {
		if s.state != nil {
			list = append(list, s)
		}
	}
	return list
}

// aboutSheet says what the workbook is about, and the verdicts.
func aboutSheet(doc *Results) *sheet {
	s := &sheet{name: "about", columns: []string{"What", "Value"}}
	t := doc.Study
	s.add("Study", t.Title)
	for _, pair := range [][2]string{{"Client", t.Client}, {"Site", t.Site}, {"Author", t.Author}, {"Revision", t.Revision}, {"Date", t.Date}, {"Remarks", t.Remarks}} {
		if pair[1] != "" {
			s.add(pair[0], pair[1])
		}
	}
	if t.Invented {
		s.add("Invented data", "The site, its equipment and every number were made up for demonstration.")
	}
	s.add("Study file, sha256", t.SHA256)
	s.add("System frequency (Hz)", doc.Settings.FrequencyHz)
	s.add("Highest order", doc.Settings.MaxOrder)
	s.add("Several sources of one order", doc.Settings.Summation)
	for _, v := range doc.Verdict {
		s.add("Verdict "+v.Point, v.Text)
		if v.Before != "" {
			s.add("Verdict "+v.Point, v.Before)
		}
	}
	s.add("Caution", "An aid for a licensed engineer, who checks and signs. Local codes and the network operator's rules come first.")
	return s
}

// busSheet has a row for each bus, state and phase.
func busSheet(doc *Results) *sheet {
	s := &sheet{name: "buses", columns: []string{"Bus", "State", "Phase", "Nominal, line to line (V)", "Fundamental (V)", "Angle (deg)", "RMS (V)", "THD (%)"}}
	for h := 2; h <= doc.Settings.MaxOrder; h++ {
		s.columns = append(s.columns, fmt.Sprintf("h%d (%%)", h))
	}
	for _, st := range doc.states() {
		for _, b := range st.state.Buses {
			for i, v := range []PhaseVoltage{b.Phases.A, b.Phases.B, b.Phases.C} {
				row := []any{b.Name, st.word, phaseName(i), b.NominalV, v.FundamentalV, v.FundamentalDegrees, v.RMSV, v.THDPercent}
				s.rows = append(s.rows, appendFrom(row, v.Percent, 2))
			}
		}
	}
	return s
}

func phaseName(i int) string { return string(rune('a' + i)) }

func appendFrom(row []any, values []Num, from int) []any {
	for h := from; h < len(values); h++ {
		row = append(row, values[h])
	}
	return row
}

// limitSheet has a row for each limit, before beside after.
func limitSheet(doc *Results) *sheet {
	s := &sheet{name: "limits", columns: []string{"Assessment", "Bus", "Quantity", "Order", "Phase", "Limit", "Unit",
		"Before", "Before, share of limit", "After", "After, share of limit", "Verdict", "Rule", "Mark"}}
	for i, p := range doc.After.Points {
		for k, r := range p.Rows {
			row := []any{p.Name, p.Bus, r.Name, r.Order, r.Phase, r.Limit, r.Unit, nil, nil, r.Value, r.Share, r.Verdict, r.Rule, r.Mark}
			if doc.Before != nil && i < len(doc.Before.Points) && k < len(doc.Before.Points[i].Rows) {
				old := doc.Before.Points[i].Rows[k]
				if old.Name == r.Name {
					row[7], row[8] = old.Value, old.Share
				}
			}
			s.rows = append(s.rows, row)
		}
		for _, text := range p.NotAssessed {
			s.add(p.Name, p.Bus, text, nil, nil, nil, nil, nil, nil, nil, nil, "not assessed", "", "")
		}
	}
	return s
}

// currentSheet has a row for each item's end, state and conductor.
func currentSheet(doc *Results) *sheet {
	s := &sheet{name: "currents", columns: []string{"Item", "Kind", "At bus", "State", "Conductor", "RMS (A)", "THD (%)"}}
	for h := 0; h <= doc.Settings.MaxOrder; h++ {
		s.columns = append(s.columns, fmt.Sprintf("h%d (A)", h))
	}
	for _, st := range doc.states() {
		for _, e := range st.state.Elements {
			for _, end := range e.Ends {
				add := func(conductor string, c Current) {
					row := []any{e.Name, e.Kind, end.Bus, st.word, conductor, c.RMSA, c.THDPercent}
					s.rows = append(s.rows, appendFrom(row, c.A, 0))
				}
				add("a", end.Phases.A)
				add("b", end.Phases.B)
				add("c", end.Phases.C)
				if end.Neutral != nil {
					add("neutral", *end.Neutral)
				}
			}
		}
	}
	return s
}

// measureSheet has a row for each component, duty and response.
func measureSheet(doc *Results) *sheet {
	s := &sheet{name: "measures", columns: []string{"Measure", "Kind", "Bus", "What", "Symbol or order", "Value", "Unit", "Note"}}
	for _, m := range doc.After.Measures {
		for _, c := range m.Components {
			s.add(m.Name, m.Kind, m.Bus, c.Part, c.Symbol, c.Value, c.Unit, c.Note)
		}
		if d := m.Duty; d != nil {
			for _, v := range []struct {
				what  string
				value Num
				unit  string
			}{
				{"line current, order 1", d.FundamentalA, "A"}, {"line current, rms", d.RMSA, "A"}, {"rated current", d.RatedA, "A"},
				{"capacitor voltage, order 1", d.FundamentalV, "V"}, {"capacitor voltage, rms", d.RMSV, "V"},
				{"capacitor voltage, peak", d.PeakV, "V"}, {"rated capacitor voltage", d.RatedV, "V"},
				{"loss, order 1", d.FundamentalW, "W"}, {"loss, all orders", d.LossW, "W"},
				{"rated capacitor output", d.RatedKvar, "kvar"}, {"output", d.OutputKvar, "kvar"},
			} {
				if v.value != 0 {
					s.add(m.Name, m.Kind, m.Bus, v.what, "", v.value, v.unit, "")
				}
			}
		}
		for _, g := range m.Response {
			s.add(m.Name, m.Kind, m.Bus, "gain", strconv.Itoa(g.Order), g.Ratio, "", "")
			s.add(m.Name, m.Kind, m.Bus, "lag", strconv.Itoa(g.Order), g.LagDegrees, "deg", "")
		}
		for _, text := range m.Notes {
			s.add(m.Name, m.Kind, m.Bus, "note", "", nil, "", text)
		}
	}
	return s
}

// inputSheet has a row for each value of the study file.
func inputSheet(doc *Results) *sheet {
	s := &sheet{name: "assumptions", columns: []string{"Item", "Kind", "Quantity", "Key", "Value", "Unit", "Origin", "Note"}}
	for _, v := range doc.Provenance {
		value := v.Value
		switch value.(type) {
		case Num, bool, string:
		default:
			value = valueText(v)
		}
		s.add(v.Item, v.Kind, v.Label, v.Field, value, v.Unit, v.Origin, v.Note)
	}
	for _, d := range doc.Defaults {
		for _, name := range d.Items {
			s.add(name, d.Kind, d.Label, d.Field, d.Default, "", "default", "")
		}
	}
	return s
}

// csv returns the sheet as comma-separated values, numbers with a point.
func (s *sheet) csv() ([]byte, error) {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	if err := w.Write(s.columns); err != nil {
		return nil, err
	}
	for _, row := range s.rows {
		line := make([]string, len(row))
		for i, v := range row {
			line[i] = plainText(v)
		}
		if err := w.Write(line); err != nil {
			return nil, err
		}
	}
	w.Flush()
	return b.Bytes(), w.Error()
}

func plainText(v any) string {
	switch x := v.(type) {
	case nil:
		return ""
	case Num:
		text, err := x.MarshalJSON()
		if err != nil {
			return ""
		}
		return string(text)
	}
	return fmt.Sprint(v)
}

// workbook returns the sheets as one workbook, headings bold and kept in
// sight.
func workbook(list []*sheet) (raw []byte, err error) {
	book := excelize.NewFile()
	defer func() {
		if e := book.Close(); err == nil {
			err = e
		}
	}()
	head, err := book.NewStyle(&excelize.Style{
		Font:      &excelize.Font{Bold: true, Family: "Liberation Sans", Size: 10},
		Alignment: &excelize.Alignment{WrapText: true, Vertical: "bottom"},
		Border:    []excelize.Border{{Type: "bottom", Style: 1, Color: "1B1D1F"}},
	})
	if err != nil {
		return nil, err
	}
	for i, s := range list {
		if i == 0 {
			err = book.SetSheetName("Sheet1", s.name)
		} else {
			_, err = book.NewSheet(s.name)
		}
		if err == nil {
			err = s.fill(book, head)
		}
		if err != nil {
			return nil, fmt.Errorf("tables.xlsx, sheet %s: %w", s.name, err)
		}
	}
	var b bytes.Buffer
	if _, err := book.WriteTo(&b); err != nil {
		return nil, fmt.Errorf("tables.xlsx: %w", err)
	}
	if raw, err = sorted(b.Bytes()); err != nil {
		return nil, fmt.Errorf("tables.xlsx: %w", err)
	}
	return raw, nil
}

// sorted puts the parts of a workbook, which is a ZIP archive, in the order of
// their names: streamed sheets come in any order.
func sorted(raw []byte) ([]byte, error) {
	in, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	if err != nil {
		return nil, err
	}
	slices.SortFunc(in.File, func(a, b *zip.File) int { return strings.Compare(a.Name, b.Name) })
	var b bytes.Buffer
	out := zip.NewWriter(&b)
	for _, f := range in.File {
		if err := out.Copy(f); err != nil {
			return nil, err
		}
	}
	if err := out.Close(); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

func (s *sheet) fill(book *excelize.File, head int) error {
	w, err := book.NewStreamWriter(s.name)
	if err != nil {
		return err
	}
	for j := range s.columns {
		if err := w.SetColWidth(j+1, j+1, s.columnWidth(j)); err != nil {
			return err
		}
	}
	if err := w.SetPanes(&excelize.Panes{Freeze: true, YSplit: 1, TopLeftCell: "A2", ActivePane: "bottomLeft"}); err != nil {
		return err
	}
	cells := make([]any, len(s.columns))
	for j, c := range s.columns {
		cells[j] = excelize.Cell{StyleID: head, Value: c}
	}
	if err := w.SetRow("A1", cells); err != nil {
		return err
	}
	for i, row := range s.rows {
		cells = cells[:0]
		for _, v := range row {
			if n, ok := v.(Num); ok {
				v = n.rounded()
			}
			cells = append(cells, v)
		}
		at, err := excelize.CoordinatesToCellName(1, i+2)
		if err != nil {
			return err
		}
		if err := w.SetRow(at, cells); err != nil {
			return err
		}
	}
	return w.Flush()
}

// columnWidth returns a width in characters that shows most of column j.
func (s *sheet) columnWidth(j int) float64 {
	widest := min(len(s.columns[j]), 14)
	for _, row := range s.rows {
		if j < len(row) {
			if text, ok := row[j].(string); ok {
				widest = max(widest, len(text))
			}
		}
	}
	return float64(max(8, min(widest+2, 60)))
}
