/*
 * The smallest firmware: one sensor (ONE), every function of the interface (EVERY), or one law in Rust (LAW, tests/metal/one).
 * Nothing but what a logger needs is linked, so that its size is the price of the library.
 */
#ifdef LAW
double one_celsius(double ohms);

volatile double converter, result;

int main(void)
{
	for (;;)
		result = one_celsius(converter);
}
#else
#include "ohmwright.h"

#define DATA(name) extern const uint8_t name[]; extern const uint32_t name##_length
DATA(image);

static union {
	double align;
	unsigned char bytes[8192];
} model;

/* where a converter would be read, and where results go */
volatile double converter, result;
volatile int32_t word;
#ifndef ONE
volatile uint32_t sink;
#endif

int main(void)
{
	ow_inputs in = {0, 5.0, 25.0, 25.0, {25.0, 25.0, 25.0, 25.0}};
	double out;

	if (ow_model_load(model.bytes, sizeof model.bytes, image, image_length, 0) != 0)
		return 1;
#ifndef ONE
	{
		ow_inputs_f32 single = {0, 5.0f, 25.0f, 25.0f, {25.0f, 25.0f, 25.0f, 25.0f}};
		ow_columns columns = {0, 0, 0, 0, {0, 0, 0, 0}};
		static double readings[16], results[16];
		static uint8_t words[16];
		static union {
			double align;
			unsigned char bytes[8192];
		} draft;
		size_t invalid;
		float small;
		char text[32];
		columns.readings = readings;
		sink = ow_abi() + ow_version() + (uint32_t)(ow_model_size() + ow_model_align() + ow_draft_size() + ow_draft_align());
		word = ow_draft_begin(draft.bytes, sizeof draft.bytes);
		word = ow_draft_set(draft.bytes, OW_FIELD_SIGNAL, 2);
		word = ow_model_make(model.bytes, sizeof model.bytes, draft.bytes);
		word = ow_image_count(image, image_length);
		word = ow_image_text(image, image_length, 0, 0, text, sizeof text);
		word = ow_model_uses(model.bytes);
		word = ow_convert_f32(model.bytes, &single, &small);
		word = ow_convert_slice(model.bytes, &columns, 16, results, words, &invalid);
		word = ow_expect(model.bytes, 0, &in, &out);
		sink = (uint32_t)(uint8_t)*ow_status_str(word);
	}
#endif
	for (;;) {
		in.reading = converter;
		word = ow_convert(model.bytes, &in, &out);
		result = out;
	}
}
#endif
