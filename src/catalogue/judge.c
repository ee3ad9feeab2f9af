#include "catalogue/judge.h"

// The scale of a margin; zero where the bounds are one value, or where the only bound is zero.
static bool find_scale(const struct limit *limit, struct fraction *scale)
{
	struct fraction range;
	const struct fraction bound = limit->has_low ? limit->low : limit->high;
	if (limit->has_low && limit->has_high)
		return fraction_subtract(limit->high, limit->low, &range) && fraction_divide(range, fraction_whole(2), scale);
	if (limit->has_nominal && fraction_compare(limit->nominal, bound) != 0)
		return limit->has_low ? fraction_subtract(limit->nominal, bound, scale) : fraction_subtract(bound, limit->nominal, scale);
	*scale = bound;
	if (scale->numerator < 0)
		scale->numerator = -scale->numerator;
	return true;
}

// How far the interval stays from the nearer bound. Both bounds have the same scale, so that the nearer in value is it.
static bool find_margin(const struct limit *limit, struct interval measured, struct fraction *margin)
{
	struct fraction above_low, below_high;
	if (limit->has_low && !fraction_subtract(measured.low, limit->low, &above_low))
		return false;
	if (limit->has_high && !fraction_subtract(limit->high, measured.high, &below_high))
		return false;
	const bool low_is_nearer = limit->has_low && (!limit->has_high || fraction_compare(above_low, below_high) <= 0);
	*margin = low_is_nearer ? above_low : below_high;
	return true;
}

static bool find_share(const struct limit *limit, struct fraction margin, struct judgement *judgement)
{
	const struct fraction one = fraction_whole(1);
	struct fraction scale;
	if (!find_scale(limit, &scale))
		return false;
	judgement->has_share = !(limit->has_low && limit->has_high && scale.numerator == 0);
	judgement->share = FRACTION_ZERO;
	if (!judgement->has_share)
		return true;
	if (scale.numerator == 0) {
		judgement->share = fraction_whole((margin.numerator > 0) - (margin.numerator < 0));
		return true;
	}
	if (!fraction_divide(margin, scale, &judgement->share))
		return false;
	if (fraction_compare(judgement->share, one) > 0)
		judgement->share = one;
	return true;
}

struct judgement limit_judge(const struct limit *limit, struct interval measured)
{
	struct judgement result = {.binds = limit->has_low || limit->has_high, .margin = FRACTION_ZERO, .share = FRACTION_ZERO};
	if (!result.binds)
		return result;
	result.kept = (!limit->has_low || fraction_compare(measured.low, limit->low) >= 0) &&
	              (!limit->has_high || fraction_compare(measured.high, limit->high) <= 0);
	result.has_margin = find_margin(limit, measured, &result.margin) && find_share(limit, result.margin, &result);
	if (!result.has_margin) {
		result.margin = result.share = FRACTION_ZERO;
		result.has_share = false;
	}
	return result;
}

#define MILLION 1000000

// value × (1 + sign × ppm / 1,000,000), or divided by it.
static bool scale(struct fraction value, struct fraction ppm, int sign, bool divide, struct fraction *result)
{
	struct fraction factor;
	if (!fraction_divide(ppm, fraction_whole(sign * MILLION), &factor) || !fraction_add(fraction_whole(1), factor, &factor))
		return false;
	return divide ? fraction_divide(value, factor, result) : fraction_multiply(value, factor, result);
}

bool interval_widen(struct interval *interval, enum dimension dimension, struct fraction accuracy_ppm)
{
	struct interval wide;
	const bool time = dimension == DIMENSION_TIME;
	if ((dimension != DIMENSION_FREQUENCY && !time) || accuracy_ppm.numerator == 0)
		return true;
	// A negative time (a breezeway that is none) grows away from zero, so the sign decides which end is which.
	const int low_sign = (interval->low.numerator < 0) != time ? 1 : -1;
	const int high_sign = (interval->high.numerator < 0) != time ? -1 : 1;
	if (!scale(interval->low, accuracy_ppm, low_sign, time, &wide.low) ||
	    !scale(interval->high, accuracy_ppm, high_sign, time, &wide.high))
		return false;
	*interval = wide;
	return true;
}
