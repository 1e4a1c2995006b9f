package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

func someFields() []SheetField {
	return []SheetField{
		{Key: "name", Label: "Name", Help: "Unique name; other items refer to it.", Kind: FieldText, Text: "T1", Need: true},
		{Key: "hvBus", Label: "HV bus", Help: "Bus of the high-voltage winding.", Kind: FieldReference, Text: "MV", Choices: []string{"MV", "LV1", "LV2"}, Need: true},
		{Key: "ratedKVA", Label: "Rated power", Unit: "kVA", Help: "Nameplate power.", Typical: "25 to 63000", Kind: FieldNumber, Text: "630", Need: true, Sourced: true, Origin: OriginGiven, Note: "nameplate"},
		{Key: "impedancePercent", Label: "Impedance", Unit: "%", Help: "Short-circuit impedance on own rating, from the nameplate or the routine test, not from the catalogue if there is a choice.", Typical: "3.5 to 13", Kind: FieldNumber, Text: "6", Need: true, Sourced: true, Origin: OriginAssumed, Note: "typical for the size"},
		{Key: "tap", Label: "Tap", Unit: "%", Kind: FieldNumber, Default: "0", Help: "Tap position.", Sourced: true},
		{Key: "closed", Label: "Earthed star point", Kind: FieldBool, Text: "true", Help: "Closed or not."},
		{Key: "replaces", Label: "Replaces", Kind: FieldMulti, Text: "M2", Choices: []string{"M1", "M2"}, Help: "Measures it replaces."},
		{Key: "spectrum", Label: "Spectrum", Kind: FieldLines, Text: "5\t20\t180\n7\t14\t0", Help: "Per cent of order 1.",
			Columns: []Column{{Label: "Order"}, {Label: "Current", Unit: "%"}, {Label: "Angle", Unit: "deg", Optional: true}}},
	}
}

func TestSheetLooks(t *testing.T) {
	for _, look := range looks {
		var s *Sheet
		w := stage(t, look, fyne.NewSize(560, 720), func() fyne.CanvasObject {
			s = NewSheet("Transformer T1")
			s.Fields = someFields
			s.OnRemove = func() {}
			s.Reload()
			return s
		})
		s.SetText("ratedKVA", "6e")
		s.FocusField("impedancePercent")
		keep(t, "sheet-"+look.name, w.Canvas().Capture())
		s.scroll.ScrollToBottom()
		keep(t, "sheet-low-"+look.name, w.Canvas().Capture())
		test.FocusNext(w.Canvas())
	}
}
