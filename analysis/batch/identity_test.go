package batch

import (
	"fmt"
	"reflect"
	"slices"
	"testing"

	"holdfast/analysis/hold"
)

// Every option of a hold job that can decide a result is among the settings of a batch, so
// that a folder begun with another one is refused with its name.
func TestSettingsHoldEveryOption(t *testing.T) {
	silent := []string{"Second", "Point", "States", "Threads", "Lanes", "Folder", "Command", "Progress", "Notice", "Cores"} // not the user's in a batch, or of no effect
	plain := fmt.Sprint(holdSettings(hold.Options{}))
	options := reflect.TypeFor[hold.Options]()
	for i := range options.NumField() {
		f := options.Field(i)
		if !f.IsExported() || slices.Contains(silent, f.Name) {
			continue
		}
		var o hold.Options
		switch v := reflect.ValueOf(&o).Elem().Field(i); v.Kind() {
		case reflect.String:
			v.SetString("x")
		case reflect.Int64, reflect.Int:
			v.SetInt(7)
		case reflect.Uint64:
			v.SetUint(7)
		case reflect.Float64:
			v.SetFloat(7)
		case reflect.Slice:
			v.Set(reflect.ValueOf([]float64{7}))
		default:
			t.Fatalf("a field of another kind: %s", f.Name)
		}
		if fmt.Sprint(holdSettings(o)) == plain {
			t.Errorf("%s is not among the settings", f.Name)
		}
	}
}
