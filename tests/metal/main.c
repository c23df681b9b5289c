/*
 * Every kind of chain, there and back, printed with 17 digits, and the check values of tests/capi/check.c: the same text is to
 * come from a host and from a microcontroller. There, lines that begin with # tell how much stack each function took.
 */
#define main check_main
#include "../capi/check.c"
#undef main

#include "cases.h"

extern const uint8_t image_bytes[];
extern const uint32_t image_length;

enum entry { COUNT, LOAD, TEXT, BEGIN, SET, CHECK, MAKE, USES, EXPECT, CONVERT, WORD, CONVERT_F32, SLICE, SLICE_WORDS, ENTRIES };

#ifdef __arm__
static const char *const entry_names[ENTRIES] = {
	"ow_image_count", "ow_model_load", "ow_image_text", "ow_draft_begin", "ow_draft_set", "ow_draft_check", "ow_model_make", "ow_model_uses",
	"ow_expect", "ow_convert", "ow_convert, a reading with a word", "ow_convert_f32", "ow_convert_slice",
	"ow_convert_slice with words",
};
static uint32_t deepest[ENTRIES];
extern uint32_t stack_low[];

#define PAINT 0xA5C3E197u

/* paints all below the stack pointer, calls, and finds the lowest word that was written */
#define CALL(entry, statement)                                                                                             \
	do {                                                                                                               \
		volatile uint32_t *p_, *sp_;                                                                               \
		__asm__ volatile("mov %0, sp" : "=r"(sp_));                                                                \
		for (p_ = stack_low; p_ < sp_; p_++)                                                                       \
			*p_ = PAINT;                                                                                       \
		statement;                                                                                                 \
		for (p_ = stack_low; p_ < sp_ && *p_ == PAINT;)                                                            \
			p_++;                                                                                              \
		if ((uint32_t)((uintptr_t)sp_ - (uintptr_t)p_) > deepest[entry])                                           \
			deepest[entry] = (uint32_t)((uintptr_t)sp_ - (uintptr_t)p_);                                       \
	} while (0)
#else
#define CALL(entry, statement)                                                                                             \
	do {                                                                                                               \
		statement;                                                                                                 \
	} while (0)
#endif

#define SHARES 7
#define SLICE_ROWS 40

static double column[SLICE_ROWS], supplies[SLICE_ROWS], temperatures[SLICE_ROWS], leads[SLICE_ROWS], arms[4][SLICE_ROWS],
	got[SLICE_ROWS];
static uint8_t said[SLICE_ROWS];

static int every_kind(void)
{
	int32_t blamed = 0;
	int32_t status, chains;
	size_t n;

	CALL(COUNT, chains = ow_image_count(image_bytes, image_length));
	if (chains != (int32_t)(sizeof cases / sizeof cases[0]))
		return 60;
	for (n = 0; n < sizeof cases / sizeof cases[0]; n++) {
		ow_inputs in;
		ow_inputs_f32 single;
		ow_columns columns;
		char name[96];
		double value = 0;
		float small = 0;
		size_t invalid = 0;
		int i, k;

		CALL(TEXT, status = ow_image_text(image_bytes, image_length, n, 0, name, sizeof name));
		if (status <= 0)
			return 61;
		CALL(LOAD, status = ow_model_load(model, sizeof model_room.bytes, image_bytes, image_length, n));
		if (status != 0)
			return 62;
		CALL(USES, status = ow_model_uses(model));
		printf("%s, uses %ld\n", name, (long)status);
		in.supply = cases[n].supply;
		in.celsius = cases[n].celsius;
		in.lead_celsius = cases[n].lead_celsius;
		for (k = 0; k < 4; k++)
			in.arm_celsius[k] = cases[n].arm_celsius[k];
		for (i = 0; i < SLICE_ROWS; i++) {
			/* a few results, then readings far too large and none */
			double share = (double)(i % SHARES) / (SHARES - 1);
			in.reading = 0;
			status = 0;
			if (i % SHARES == SHARES - 1 && i > SHARES)
				in.reading = i % 2 == 0 ? 1e9 : 0.0 / (share - share);
			else
				CALL(EXPECT, status = ow_expect(model,
							 cases[n].low + (0.001 + 0.998 * share) * (cases[n].high - cases[n].low),
							 &in, &in.reading));
			if (status != 0)
				return 63;
			if (i < 2 * SHARES) {
				/* a NaN prints with a sign or without */
				if (in.reading == in.reading)
					printf("%.17g", in.reading);
				else
					printf("nothing");
				if (in.reading < 1e9)
					CALL(CONVERT, status = ow_convert(model, &in, &value));
				else
					CALL(WORD, status = ow_convert(model, &in, &value));
				if (value == value)
					printf(" %.17g %ld", value, (long)status);
				else
					printf(" none %ld", (long)status);
				single.reading = (float)in.reading;
				single.supply = (float)in.supply;
				single.celsius = (float)in.celsius;
				single.lead_celsius = (float)in.lead_celsius;
				for (k = 0; k < 4; k++)
					single.arm_celsius[k] = (float)in.arm_celsius[k];
				CALL(CONVERT_F32, status = ow_convert_f32(model, &single, &small));
				if (small == small)
					printf(" %.9g %ld\n", (double)small, (long)status);
				else
					printf(" none %ld\n", (long)status);
			}
			column[i] = in.reading;
			supplies[i] = in.supply;
			temperatures[i] = in.celsius;
			leads[i] = in.lead_celsius;
			for (k = 0; k < 4; k++)
				arms[k][i] = in.arm_celsius[k];
		}
		columns.readings = column;
		columns.supplies = supplies;
		columns.celsius = temperatures;
		columns.lead_celsius = leads;
		for (k = 0; k < 4; k++)
			columns.arm_celsius[k] = arms[k];
		CALL(SLICE, status = ow_convert_slice(model, &columns, SLICE_ROWS, got, NULL, NULL));
		if (status != 0)
			return 64;
		CALL(SLICE_WORDS, status = ow_convert_slice(model, &columns, SLICE_ROWS, got, said, &invalid));
		if (status != 0)
			return 65;
		for (i = 0; i < SLICE_ROWS; i++) {
			in.reading = column[i];
			status = ow_convert(model, &in, &value);
			if (status != said[i] || memcmp(&value, &got[i], sizeof value) != 0)
				return 66;
		}
		printf("%lu without a number\n", (unsigned long)invalid);
	}
	/* the other way to a model */
	CALL(BEGIN, status = ow_draft_begin(draft, sizeof draft_room.bytes));
	CALL(SET, status |= ow_draft_set(draft, OW_FIELD_SIGNAL, 2));
	if (status != 0 || quarter() != 0)
		return 67;
	CALL(CHECK, status = ow_draft_check(draft, &blamed));
	if (status != 0 || blamed != -1)
		return 69;
	CALL(MAKE, status = ow_model_make(model, sizeof model_room.bytes, draft));
	return status != 0 ? 68 : 0;
}

int main(void)
{
	int failed;
	model = model_room.bytes;
	second = second_room.bytes;
	draft = draft_room.bytes;
	failed = checks();
	printf("check values: %d\n", failed);
	if (failed == 0)
		failed = every_kind();
	printf("every kind: %d\n", failed);
#ifdef __arm__
	{
		int n;
		for (n = 0; n < ENTRIES; n++)
			printf("# %s | %lu\n", entry_names[n], (unsigned long)deepest[n]);
		printf("# model | %lu\n# draft | %lu\n", (unsigned long)ow_model_size(), (unsigned long)ow_draft_size());
	}
#endif
	return failed;
}
