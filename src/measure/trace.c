#include "measure/trace.h"

#include "base/arena.h"

// A signal on its way through the cells.
struct probe {
	uint64_t bit;                  // 0 if the plan has no such signal
	uint64_t inverted;             // the bit itself where a pulse is the signal not asserted
	uint32_t cell;                 // where its pin shows the timeline's cell at which the walk is
};

struct walk {
	const struct recording *recording;
	struct probe probes[TRACED_COUNT];
	struct probe stretch;
	int64_t cell_ticks, stretch_ticks;
};

static struct probe place_probe(const struct recording *recording, int signal, bool inverted)
{
	if (signal < 0)
		return (struct probe){0, 0, 0};
	const int64_t cells = recording->cells;
	const int64_t lead = recording->at_pins ? recording->plan->signals[signal].lead_cells % cells : 0;
	const uint64_t bit = (uint64_t)1 << signal;
	return (struct probe){bit, inverted ? bit : 0, (uint32_t)((cells - lead) % cells)};
}

static bool probe_shows(const struct recording *recording, const struct probe *probe)
{
	return ((recording->asserted[probe->cell] ^ probe->inverted) & probe->bit) != 0;
}

static void probe_step(const struct recording *recording, struct probe *probe)
{
	probe->cell = probe->cell + 1 == recording->cells ? 0 : probe->cell + 1;
}

static int traced_signal(const struct recording *recording, const struct trace *trace, enum traced traced)
{
	const int *roles = recording->plan->role_signal;
	switch (traced) {
	case TRACED_SYNC: return trace->separate ? roles[ROLE_HORIZONTAL_SYNC] : roles[ROLE_COMPOSITE_SYNC];
	case TRACED_VERTICAL: return trace->separate ? roles[ROLE_VERTICAL_SYNC] : -1;
	case TRACED_BURST: return roles[ROLE_BURST_GATE];
	case TRACED_PICTURE: return roles[ROLE_BLANKING];
	case TRACED_COUNT: break;
	}
	return -1;
}

static void begin_walk(const struct recording *recording, const struct trace *trace, struct walk *walk)
{
	const struct plan *plan = recording->plan;
	walk->recording = recording;
	walk->cell_ticks = plan->clock.cell_ticks;
	walk->stretch_ticks = plan->clock.stretch_ticks;
	walk->stretch = place_probe(recording, plan->role_signal[ROLE_STRETCH], false);
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++)
		walk->probes[traced] = place_probe(recording, traced_signal(recording, trace, (enum traced)traced), traced == TRACED_PICTURE);
}

// The ticks of the cell at which the walk is; goes on to the next.
static int64_t step_cell(struct walk *walk)
{
	const int64_t ticks = walk->cell_ticks + (probe_shows(walk->recording, &walk->stretch) ? walk->stretch_ticks : 0);
	probe_step(walk->recording, &walk->stretch);
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++)
		probe_step(walk->recording, &walk->probes[traced]);
	return ticks;
}

// How often each probe begins to show over a frame that repeats, and whether it shows at its end.
static void count_pulses(const struct recording *recording, struct trace *trace, uint32_t starts[TRACED_COUNT], bool last[TRACED_COUNT])
{
	struct walk walk;
	begin_walk(recording, trace, &walk);
	bool first[TRACED_COUNT];
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++) {
		first[traced] = last[traced] = probe_shows(recording, &walk.probes[traced]);
		starts[traced] = 0;
	}
	for (uint32_t cell = 0; cell < recording->cells; cell++) {
		for (unsigned traced = 0; traced < TRACED_COUNT; traced++) {
			const bool shows = probe_shows(recording, &walk.probes[traced]);
			starts[traced] += shows && !last[traced];
			last[traced] = shows;
		}
		step_cell(&walk);
	}
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++)
		starts[traced] += first[traced] && !last[traced];
}

// Notes the ends and starts of pulses at a cell that begins at a tick. An end before any start is of a pulse that began before the
// frame: *open is its end until the last start is known.
static void note_edge(struct pulses *pulses, bool shows, int64_t tick, uint32_t cell, struct pulse *open)
{
	if (shows) {
		pulses->list[pulses->count++] = (struct pulse){.start = tick, .start_cell = cell, .end = INT64_MAX};
		return;
	}
	struct pulse *ended = pulses->count > 0 ? &pulses->list[pulses->count - 1] : open;
	ended->end = tick;
	ended->end_cell = cell;
}

static void close_last(struct pulses *pulses, int64_t frame_ticks, const struct pulse *open)
{
	struct pulse *last = pulses->count > 0 ? &pulses->list[pulses->count - 1] : NULL;
	if (last == NULL || last->end != INT64_MAX)
		return;
	last->end = frame_ticks + open->end;
	last->end_cell = open->end_cell;
}

// Of one frame. `last`: whether each probe shows at the frame's end.
static int64_t record_pulses(const struct recording *recording, struct trace *trace, bool last[TRACED_COUNT])
{
	struct walk walk;
	struct pulse open[TRACED_COUNT] = {{0, 0, 0, 0}};
	int64_t tick = 0;
	begin_walk(recording, trace, &walk);
	for (uint32_t cell = 0; cell < recording->cells; cell++) {
		for (unsigned traced = 0; traced < TRACED_COUNT; traced++) {
			const bool shows = probe_shows(recording, &walk.probes[traced]);
			if (shows != last[traced])
				note_edge(&trace->of[traced], shows, tick, cell, &open[traced]);
			last[traced] = shows;
		}
		tick += step_cell(&walk);
	}
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++)
		close_last(&trace->of[traced], tick, &open[traced]);
	return tick;
}

static void repeat_pulses(struct pulses *pulses, uint32_t laps, int64_t frame_ticks)
{
	const uint32_t once = pulses->count;
	for (uint32_t lap = 1; lap < laps; lap++)
		for (uint32_t index = 0; index < once; index++) {
			struct pulse pulse = pulses->list[index];
			pulse.start += lap * frame_ticks;
			pulse.end += lap * frame_ticks;
			pulses->list[pulses->count++] = pulse;
		}
}

static bool make_room(struct arena *arena, const struct recording *recording, struct trace *trace, const uint32_t starts[TRACED_COUNT],
                      const bool last[TRACED_COUNT])
{
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++) {
		struct pulses *pulses = &trace->of[traced];
		const int signal = traced_signal(recording, trace, (enum traced)traced);
		pulses->has_signal = signal >= 0;
		pulses->active_high = signal >= 0 && recording->plan->signals[signal].active_high;
		pulses->always = starts[traced] == 0 && last[traced];
		pulses->list = arena_array(arena, (size_t)starts[traced] * trace->laps, sizeof *pulses->list);
		if (pulses->list == NULL)
			return false;
	}
	return true;
}

static bool has_separate(const struct recording *recording)
{
	const int *roles = recording->plan->role_signal;
	return roles[ROLE_HORIZONTAL_SYNC] >= 0 && (recording->prefer_separate || roles[ROLE_COMPOSITE_SYNC] < 0);
}

const struct trace *trace_make(struct arena *arena, const struct recording *recording, uint32_t laps)
{
	struct trace *trace = arena_alloc(arena, sizeof *trace);
	uint32_t starts[TRACED_COUNT];
	bool last[TRACED_COUNT];
	if (trace == NULL)
		return NULL;
	trace->plan = recording->plan;
	trace->laps = laps;
	trace->separate = has_separate(recording);
	count_pulses(recording, trace, starts, last);
	if (!make_room(arena, recording, trace, starts, last))
		return NULL;
	const int64_t frame_ticks = record_pulses(recording, trace, last);
	trace->ticks = frame_ticks * laps;
	for (unsigned traced = 0; traced < TRACED_COUNT; traced++)
		repeat_pulses(&trace->of[traced], laps, frame_ticks);
	return trace;
}
