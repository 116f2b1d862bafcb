package main

import (
	"cmp"
	"context"
	"fmt"
	"runtime/debug"
	"slices"
	"time"

	"nightbook/reader"
	"nightbook/risk"
	"nightbook/risk/aggregate"
	"nightbook/risk/market"
	"nightbook/risk/vec"
	"nightbook/schema"
)

// job is a piece of the position file on its way through the program.
type job struct {
	piece reader.Piece
	batch schema.Batch
}

// moreJobs is how many pieces are on their way beside those that the workers
// have: one being cut, one being written.
const moreJobs = 2

// pipeline is the whole run: open → read → price → aggregate → write.
//
// With o.out == "" everything is read and priced, and nothing written.
func pipeline(ctx context.Context, o *options, con *console) (*schema.Summary, error) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1)) // as it was
	ctx, watch := o.watchMarket(ctx)
	defer watch.close()
	folder, err := reader.OpenFolder(ctx, o.snapshot)
	if err != nil {
		return nil, err
	}
	cfg, err := folder.Config(o.asOf)
	if err != nil {
		return nil, err
	}
	o.bound(cfg)
	raw, err := folder.Market(cfg)
	if err != nil {
		return nil, cmp.Or(watch.end(), err)
	}
	dicts := schema.NewDicts()
	mkt, marketNotes, err := buildMarket(ctx, folder, cfg, raw, dicts)
	if err := cmp.Or(watch.end(), err); err != nil {
		return nil, err
	}
	totals, err := aggregate.NewTotals(raw.Books, dicts)
	if err != nil {
		return nil, err
	}
	positions, err := folder.Positions(cfg, dicts)
	if err != nil {
		return nil, err
	}
	defer positions.Close()
	lines := schema.LinesTable(positions.Extra())
	share, err := o.divide(lines.Columns, positions)
	if err != nil {
		return nil, err
	}
	out, err := newOutputs(ctx, o, cfg, dicts, lines, share)
	if err != nil {
		return nil, err
	}
	defer out.abort()

	engine := risk.NewEngine(mkt, dicts)
	jobs := make([]*job, share.workers+moreJobs)
	for i := range jobs {
		jobs[i] = new(job)
	}
	binders := make([]*reader.Binder, share.workers)
	scratch := make([]*risk.Worker, share.workers)
	for i := range share.workers {
		binders[i], scratch[i] = positions.NewBinder(), engine.NewWorker()
	}
	gate := newGate(positions, raw.Faults, o.strict)
	if err := gate.market(out); err != nil {
		return nil, err
	}
	var memory flat
	defer memory.end()
	kept := newHeld(share.live)
	var early []schema.ExerciseRow
	bar := con.progress(positions.Size())
	err = ordered(ctx, jobs, share.workers,
		func(j *job) error { return positions.Next(&j.piece) },
		func(worker int, j *job) error {
			if err := binders[worker].Bind(&j.piece, &j.batch); err != nil {
				return err
			}
			return engine.Price(ctx, &j.batch, scratch[worker])
		},
		func(j *job) error {
			if err := gate.rows(&j.batch); err != nil {
				return err
			}
			totals.AddRejects(&j.batch)
			j.batch.Compact()
			totals.AddLines(&j.batch, engine.Kind)
			memory.reach(gate.rowsIn)
			if err := kept.check(o, positions.Name(), gate.rowsIn); err != nil {
				return err
			}
			bar.reach(j.piece.Bytes, gate.rowsIn)
			early = engine.EarlyExercise(&j.batch, early[:0])
			return out.batch(&j.batch, early)
		})
	bar.finish()
	if err != nil {
		return nil, err
	}

	s := &schema.Summary{Config: cfg, Version: version, RowsIn: gate.rowsIn, Faults: int64(len(raw.Faults)), Inputs: folder.Inputs()}
	if err := totals.Summary(ctx, s); err != nil {
		return nil, err
	}
	s.Notes = slices.Concat(s.Notes, gate.notes(), folder.Notes(), marketNotes)
	if s.RowsIn == 0 {
		s.Notes = append(s.Notes, schema.Note{Code: schema.NoPositions, Subject: positions.Name(), File: positions.Name(), Count: 1,
			Message: "the position file has no rows: every total is 0"})
	}
	sortNotes(s.Notes)
	if !s.RowsAccounted() {
		return nil, fmt.Errorf("%d rows came in, but %d were priced, %d expired and %d rejected: nothing is written, because rows were lost; this is a fault of the program",
			s.RowsIn, s.Total.Priced, s.Total.Expired, s.Rejects)
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return s, out.finish(s)
}

// buildMarket builds the market; where run.toml says so, its surfaces are those
// that the quotes imply.
func buildMarket(ctx context.Context, folder *reader.Folder, cfg *schema.Config, raw *schema.Market, dicts *schema.Dicts) (*market.Market, []schema.Note, error) {
	if !cfg.Vols.FromQuotes {
		return market.New(cfg, raw, dicts)
	}
	raw.Vols = nil
	bare, _, err := market.New(cfg, raw, dicts)
	if err != nil {
		return nil, nil, err
	}
	implied, err := risk.Imply(ctx, bare, dicts, raw.Quotes)
	if err != nil {
		return nil, nil, err
	}
	vols, lost := risk.SurfaceOf(implied, folder.FileOf("quotes"))
	raw.Vols = vols
	m, notes, err := market.New(cfg, raw, dicts)
	return m, append(lost, notes...), err
}

// timed runs the pipeline and tells how it went.
func timed(ctx context.Context, verb string, o *options, con *console) error {
	if note := vec.TierNote(); note != "" {
		con.say(note)
	}
	start := time.Now()
	s, err := pipeline(ctx, o, con)
	if err != nil {
		return err
	}
	con.finished(verb, s, o.resultFolder(s.Config), time.Since(start))
	if s.Rejects+s.Faults > 0 {
		return &statusError{exitRejected, nil}
	}
	return nil
}
