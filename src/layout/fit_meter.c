#include "layout/fit_meter.h"

#include <assert.h>

#include "base/arena.h"

static bool binds(const struct limit *limit)
{
	return limit != NULL && (limit->has_low || limit->has_high);
}

void fit_meter_begin(struct fit_meter *meter, struct arena *arena, const struct standard *standard, enum limit_grade grade)
{
	*meter = (struct fit_meter){.arena = arena, .standard = standard, .grade = grade};
}

void fit_meter_open(struct fit_meter *meter, enum limit_item item, struct fraction unit, int64_t most)
{
	const struct limit *limit = standard_limit(meter->standard, item, meter->grade);
	if (!binds(limit))
		return;
	struct fit_mark *marks = arena_array(meter->arena, (size_t)most + 1, sizeof *marks);
	if (marks == NULL) {
		meter->failed = true;
		return;
	}
	meter->gauges[item] = (struct fit_gauge){limit, unit, marks, most};
}

static struct fit_mark judge(struct fit_meter *meter, const struct limit *limit, struct fraction value)
{
	const struct judgement judgement = limit_judge(limit, (struct interval){value, value});
	if (!judgement.has_margin) {
		meter->unfit = true;
		return (struct fit_mark){0};
	}
	return (struct fit_mark){true, judgement.kept, judgement.kept && judgement.has_share, judgement.share};
}

const struct fit_mark *fit_meter_mark(struct fit_meter *meter, enum limit_item item, int64_t count)
{
	struct fit_gauge *gauge = &meter->gauges[item];
	if (gauge->limit == NULL)
		return NULL;
	assert(count >= 0 && count <= gauge->most);
	struct fit_mark *mark = &gauge->marks[count];
	if (mark->judged)
		return mark;
	struct fraction value;
	if (!fraction_multiply(gauge->unit, fraction_whole(count), &value)) {
		meter->unfit = true;
		return NULL;
	}
	*mark = judge(meter, gauge->limit, value);
	return mark->judged ? mark : NULL;
}

struct fit_mark fit_meter_judge(struct fit_meter *meter, enum limit_item item, struct fraction value)
{
	const struct limit *limit = standard_limit(meter->standard, item, meter->grade);
	return binds(limit) ? judge(meter, limit, value) : (struct fit_mark){0};
}

static void insert_share(struct fit_standing *standing, struct fraction share)
{
	assert(standing->count < FIT_STANDING_SHARES);
	unsigned place = standing->count++;
	for (; place > 0 && fraction_compare(standing->shares[place - 1], share) > 0; place--)
		standing->shares[place] = standing->shares[place - 1];
	standing->shares[place] = share;
}

void fit_standing_add(struct fit_standing *standing, const struct fit_mark *mark)
{
	if (mark == NULL || !mark->kept)
		return;
	standing->kept++;
	if (mark->has_share)
		insert_share(standing, mark->share);
}

void fit_standing_join(struct fit_standing *standing, const struct fit_standing *other)
{
	standing->kept += other->kept;
	for (unsigned index = 0; index < other->count; index++)
		insert_share(standing, other->shares[index]);
}

struct fraction fit_standing_share(const struct fit_standing *standing)
{
	return standing->count > 0 ? standing->shares[0] : fraction_whole(1);
}

int fit_standing_compare(const struct fit_standing *left, const struct fit_standing *right, unsigned depth)
{
	const struct fraction one = fraction_whole(1);
	if (left->kept != right->kept)
		return left->kept < right->kept ? -1 : 1;
	for (unsigned place = 0; place < depth && (place < left->count || place < right->count); place++) {
		const int order = fraction_compare(place < left->count ? left->shares[place] : one,
		                                   place < right->count ? right->shares[place] : one);
		if (order != 0)
			return order;
	}
	return 0;
}
