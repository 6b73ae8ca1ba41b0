package register

import (
	"bytes"
	"context"
	"fmt"

	"tautbook/survey"
)

// verifyDesigns holds every design row against its cables file.
func (r *Register) verifyDesigns(ctx context.Context, v *Verification) error {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&designRow{}).columns(), "")+" FROM designs ORDER BY cables_sha256, structure, cable, span")
	if err != nil {
		return r.told(err)
	}
	stored := map[string][]designRow{}
	defer rows.Close()
	for rows.Next() {
		var d designRow
		if err := rows.Scan(places(d.columns())...); err != nil {
			v.fault("designs", fmt.Sprintf("%s %s %s", d.CablesSHA256, d.Cable, d.Span), "%v", err)
			continue
		}
		v.Designs++
		stored[d.CablesSHA256] = append(stored[d.CablesSHA256], d)
	}
	if err := rows.Err(); err != nil {
		return r.told(err)
	}
	for sum, list := range stored {
		f, err := r.StoredFile(ctx, sum)
		if err != nil {
			continue // verifyFiles has named it
		}
		designs, _, err := survey.ReadDesigns(bytes.NewReader(f.Bytes), f.Name)
		if err != nil {
			v.fault("files", sum, "%v", err)
			continue
		}
		compareDesigns(v, sum, list, designs)
	}
	return nil
}

func compareDesigns(v *Verification, sum string, stored []designRow, designs []survey.Design) {
	fresh := map[[3]string]survey.Design{}
	for _, d := range designs {
		fresh[[3]string{d.Structure, d.Cable, d.Span}] = d
	}
	for _, s := range stored {
		key := [3]string{s.Structure, s.Cable, s.Span}
		row := designRow{sum, fresh[key]}
		if d := differences(s.columns(), row.columns()); d != "" {
			v.fault("designs", fmt.Sprintf("%s %q %q %q", sum[:12], s.Structure, s.Cable, s.Span), "%s", d)
		}
		delete(fresh, key)
	}
	for key := range fresh {
		v.fault("designs", fmt.Sprintf("%s %q", sum[:12], key), "missing")
	}
}
