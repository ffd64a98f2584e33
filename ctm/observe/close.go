package observe

// Close completes the results where a run ends before its period does: what stands then has no clearance. After the
// last state of the period it does nothing.
func (o *Queues) Close() {
	if o.live != nil || o.past != nil {
		o.finish()
	}
}
