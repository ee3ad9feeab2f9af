// The files to burn, and the jumpers that choose a bank.
#include <inttypes.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "image/image.h"
#include "view/nets.h"
#include "view/page.h"
#include "view/sheet_parts.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

enum { BURN_CHIP, BURN_PART, BURN_FILE, BURN_BYTES, BURN_CRC, BURN_SUM, BURN_BANK };

static const struct column burn_columns[] = {
	[BURN_CHIP] = {"chip", false},  [BURN_PART] = {"part", false},   [BURN_FILE] = {"file", false},        [BURN_BYTES] = {"bytes", true},
	[BURN_CRC] = {"CRC-32", true},  [BURN_SUM] = {"16-bit sum", true}, [BURN_BANK] = {"bank jumpers at", false},
};

static void put_bank_pins(struct text *out, const struct chip *chip)
{
	bool any = false;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		if (chip->address[pin].kind != ADDRESS_BANK)
			continue;
		text_printf(out, "%sA%u bank.%u", any ? ", " : "", pin, chip->address[pin].index);
		any = true;
	}
	if (!any)
		text_put(out, "none");
}

static void put_burn_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct sheet *sheet = context;
	const struct chip *chip = &sheet_plan(sheet)->chips[row];
	const struct image *image = &sheet->images[row];
	switch (column) {
	case BURN_CHIP: text_put(out, chip->label); break;
	case BURN_PART: text_put(out, chip->part->name); break;
	case BURN_FILE: text_printf(out, "%s.%s.bin\nor %s.%s.hex", sheet_name(sheet), chip->label, sheet_name(sheet), chip->label); break;
	case BURN_BYTES: text_printf(out, "%zu", image->length); break;
	case BURN_CRC: text_printf(out, "%08" PRIx32, image_crc32(image)); break;
	case BURN_SUM: text_printf(out, "0x%04X", (unsigned)image_sum16(image)); break;
	default: put_bank_pins(out, chip); break;
	}
}

static bool any_wide(const struct plan *plan)
{
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		if (plan->chips[chip].part->data_pins > 8)
			return true;
	return false;
}

void sheet_burn(struct text *out, const struct sheet *sheet)
{
	const struct plan *plan = sheet_plan(sheet);
	const struct page_table table = {NULL, "burn", {burn_columns, COUNT_OF(burn_columns), plan->chip_count, put_burn_cell, sheet}, NULL};
	if (sheet_refused(sheet))
		page_element(out, "p", " class=\"warning\"", "Do not burn: these images are not approved.");
	page_table(out, &table);
	page_element(out, "p", "", "scanlatch build writes the files. The 16-bit sum is that of all bytes, as device programmers show it.%s",
	             any_wide(plan) ? " In the file of a 16-bit part the low byte of a word comes first." : "");
}

enum { BANK_NUMBERS, BANK_JUMPERS, BANK_PLAN, BANK_REVISION };

static const struct column bank_columns[] = {
	[BANK_NUMBERS] = {"bank", false}, [BANK_JUMPERS] = {"jumpers", false}, [BANK_PLAN] = {"plan", false}, [BANK_REVISION] = {"revision (CRC-32)", false},
};

static void put_jumpers(struct text *out, unsigned bits, uint32_t number)
{
	for (unsigned bit = bits; bit-- > 0;)
		text_printf(out, "bank.%u %s%s", bit, number >> bit & 1 ? "high" : "low", bit > 0 ? ", " : "");
}

static void put_bank_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct sheet *sheet = context;
	const struct set *set = sheet->view->set;
	const struct plan *plan = sheet->view->proofs[row]->timeline->plan;
	switch (column) {
	case BANK_NUMBERS: text_printf(out, "%u", set->banks[row].number); break;
	case BANK_JUMPERS: put_jumpers(out, set->bank_bits, set->banks[row].number); break;
	case BANK_PLAN: text_printf(out, "%s\n%s", plan->name, plan->file_name); break;
	default: text_printf(out, "%08" PRIx32, plan->source_crc32); break;
	}
}

static void put_jumper_pins(struct text *out, const struct plan *plan)
{
	text_put(out, "<ul>\n");
	for (unsigned bit = 0; bit < plan->bank_bits; bit++) {
		struct text words = {0};
		bool any = false;
		text_printf(&words, "Jumper bank.%u, between high and low, goes to ", bit);
		for (enum stage stage = STAGE_LINE; stage < machine_stages(&plan->machine); stage++) {
			struct text pins = {0};
			if (put_address_pins(&pins, plan, stage, ADDRESS_BANK, bit)) {
				text_printf(&words, "%s%s", any ? "; " : "", text_string(&pins));
				any = true;
			}
			words.failed = words.failed || pins.failed;
			text_release(&pins);
		}
		text_put(&words, ".");
		page_element_of(out, "li", "", &words);
	}
	text_put(out, "</ul>\n");
}

void sheet_banks(struct text *out, const struct sheet *sheet)
{
	const struct plan *plan = sheet_plan(sheet);
	if (plan->bank_bits == 0)
		return;
	page_element(out, "h3", "", "Bank jumpers");
	put_jumper_pins(out, plan);
	if (sheet->view->set == NULL) {
		page_element(out, "p", "", "All banks hold the same plan: the jumpers may be set either way, but must be set.");
		return;
	}
	const struct page_table table = {NULL, "banks", {bank_columns, COUNT_OF(bank_columns), sheet->view->count, put_bank_cell, sheet}, NULL};
	page_table(out, &table);
	if (sheet->view->count < (size_t)1 << plan->bank_bits)
		page_element(out, "p", "", "All other settings show bank 0 again.");
	page_element(out, "p", "", "%s", set_comes_home(sheet->view) ? "The jumpers may be changed while the machine runs: every state of every bank comes home."
	                                                            : "Do not change the jumpers while the machine runs: some state of some bank never comes home.");
}
