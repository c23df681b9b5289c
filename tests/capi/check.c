/*
 * The C interface against published values, and every way to use it wrongly.
 *
 * IEC 60751:2008: a 100 ohm element has 138.5055 ohm at 100 degC (A, B of the standard, by hand) and 60.26 ohm at -100 degC.
 * NIST ITS-90 tables: type K gives 4.096 mV at 100 degC.
 * One active 350 ohm arm, gauge factor 2.08, three wires of 2.6 ohm, 1.2075 mV at 2.500 V: 936.651 microstrain, by hand from
 * R1/(R1 + R2) - 1/2 with R1 = 350 (1 + F e) + 2.6 and R2 = 352.6.
 *
 * Clean as C99, C11, C++11 and C++17. Returns the number of the first check that failed, or 0.
 */
#include "ohmwright.h"

#include <stdio.h>
#include <string.h>

/* an image without a chain: its header, and the CRC-32 of that by zlib */
static const uint8_t none[] = "OHMW\1\0\0\0\0\0\0\0\165\266\164\344";

/* storage for any model and draft, aligned as a double */
static union {
	double align;
	unsigned char bytes[8192];
} model_room, second_room, draft_room;

static void *model, *second, *draft;

static double magnitude(double x)
{
	return x < 0 ? -x : x;
}

static int set(uint32_t field, double value)
{
	return ow_draft_set(draft, field, value);
}

static int begin(void)
{
	return ow_draft_begin(draft, sizeof draft_room.bytes);
}

static int make(void)
{
	return ow_model_make(model, sizeof model_room.bytes, draft);
}

static int platinum(void)
{
	int bad = begin();
	bad |= set(OW_FIELD_SIGNAL, 2);
	bad |= set(OW_FIELD_NETWORK, 1);
	bad |= set(OW_FIELD_ELEMENT, 3);
	bad |= set(OW_FIELD_LAW_OHMS, 100);
	bad |= set(OW_FIELD_LAW_COEFFICIENT, 3.9083e-3);
	bad |= set(OW_FIELD_LAW_COEFFICIENT + 1, -5.775e-7);
	bad |= set(OW_FIELD_LAW_COEFFICIENT + 2, -4.183e-12);
	bad |= set(OW_FIELD_LAW_RANGE, -200);
	bad |= set(OW_FIELD_LAW_RANGE + 1, 850);
	bad |= set(OW_FIELD_OUTPUT, 2);
	return bad != 0 ? bad : make();
}

static int quarter(void)
{
	int i, bad = begin();
	bad |= set(OW_FIELD_SIGNAL, 0);
	bad |= set(OW_FIELD_READING_EXPONENT, -3);
	bad |= set(OW_FIELD_SUPPLY, 1);
	bad |= set(OW_FIELD_SUPPLY_VALUE, 2.5);
	bad |= set(OW_FIELD_NETWORK, 0);
	for (i = 0; i < 4; i++)
		bad |= set(OW_FIELD_ARM_RESISTANCE + (uint32_t)i, 350);
	bad |= set(OW_FIELD_ARM_KIND, 1);
	bad |= set(OW_FIELD_ARM_FACTOR, 1);
	bad |= set(OW_FIELD_LEAD_WIRES, 3);
	bad |= set(OW_FIELD_LEAD_OHMS, 2.6);
	bad |= set(OW_FIELD_ELEMENT, 0);
	bad |= set(OW_FIELD_GAUGE_FACTOR, 2.08);
	bad |= set(OW_FIELD_LIMIT, 0.1);
	bad |= set(OW_FIELD_OUTPUT, 0);
	bad |= set(OW_FIELD_OUTPUT_EXPONENT, 6);
	return bad != 0 ? bad : make();
}

static int type_k(void)
{
	int bad = begin();
	bad |= set(OW_FIELD_SIGNAL, 0);
	bad |= set(OW_FIELD_READING_EXPONENT, -3);
	bad |= set(OW_FIELD_NETWORK, 5);
	bad |= set(OW_FIELD_ELEMENT, 13);
	bad |= set(OW_FIELD_THERMOCOUPLE, 3);
	bad |= set(OW_FIELD_TEMPERATURE_KIND, 2);
	bad |= set(OW_FIELD_OUTPUT, 2);
	return bad != 0 ? bad : make();
}

#define ROWS 1500

static double readings[ROWS], junctions[ROWS], results[ROWS];
static uint8_t words[ROWS];

static int checks(void)
{
	ow_inputs in;
	ow_inputs_f32 single;
	ow_columns columns;
	double out, back;
	float small;
	size_t invalid = 99;
	char text[8];
	int i;
	unsigned char *odd;

	memset(&in, 0, sizeof in);
	memset(&single, 0, sizeof single);
	memset(&columns, 0, sizeof columns);

	if (ow_abi() != OW_ABI || ow_version() < 100)
		return 1;
	if (ow_model_size() > sizeof model_room.bytes || ow_draft_size() > sizeof draft_room.bytes)
		return 2;
	if (ow_model_align() > sizeof(double) || ow_draft_align() > sizeof(double))
		return 3;

	/* before anything was made */
	if (ow_convert(model, &in, &out) != OW_NO_MODEL || ow_draft_set(draft, 0, 0) != OW_NO_MODEL)
		return 4;
	if (ow_convert(NULL, &in, &out) != OW_NULL || ow_draft_begin(NULL, 8192) != OW_NULL)
		return 5;
	odd = model_room.bytes + 1;
	if (ow_convert(odd, &in, &out) != OW_MISALIGNED || ow_model_make(odd, 8000, draft) != OW_MISALIGNED)
		return 6;
	if (ow_draft_begin(draft, ow_draft_size() - 1) != OW_TOO_SMALL)
		return 7;

	/* platinum */
	if (platinum() != 0 || ow_model_uses(model) != 0)
		return 10;
	in.reading = 138.5055;
	if (ow_convert(model, &in, &out) != 0 || magnitude(out - 100.0) > 1e-9)
		return 11;
	if (ow_expect(model, -100.0, &in, &back) != 0 || magnitude(back - 60.26) > 0.005)
		return 12;
	in.reading = 5.0;
	if (ow_convert(model, &in, &out) != 5 || out == out || strcmp(ow_status_str(5), "short") != 0)
		return 13;
	in.reading = 2000.0;
	if (ow_convert(model, &in, &out) != 4 || out == out)
		return 14;
	single.reading = 138.5055f;
	if (ow_convert_f32(model, &single, &small) != 0 || magnitude((double)small - 100.0) > 2e-5)
		return 15;
	if (ow_expect(model, 900.0, &in, &back) != 6 || back == back)
		return 16;
	if (ow_convert(model, NULL, &out) != OW_NULL || ow_convert(model, &in, NULL) != OW_NULL)
		return 17;
	if (ow_model_make(second, ow_model_size() - 1, draft) != OW_TOO_SMALL)
		return 18;

	/* a quarter bridge */
	if (quarter() != 0)
		return 20;
	in.reading = 1.2075;
	if (ow_convert(model, &in, &out) != 0 || magnitude(out - 936.651) > 0.0005)
		return 21;
	if (ow_expect(model, out, &in, &back) != 0 || magnitude(back - 1.2075) > 1e-12)
		return 22;
	if (set(OW_FIELD_GAUGE_FACTOR, 0.0) != 0 || make() != OW_UNFIT)
		return 23;
	if (set(OW_FIELD_GAUGE_FACTOR, 2.08) != 0 || set(OW_FIELD_SUPPLY_VALUE, -2.5) != 0 || make() != OW_VALUE)
		return 28;
	if (set(OW_FIELD_SUPPLY_VALUE, 2.5) != 0 || set(OW_FIELD_ARM_KIND + 1, 1) != 0 ||
	    set(OW_FIELD_ARM_FACTOR + 1, 1) != 0 || make() != OW_BLIND)
		return 24;
	if (set(OW_FIELD_ARM_KIND, 7) != 0 || make() != OW_FIELD)
		return 25;
	if (set(19, 1) != OW_FIELD || set(70000, 1) != OW_FIELD)
		return 26;
	if (begin() != 0 || make() != OW_MISSING)
		return 27;

	/* type K with its junction in a column */
	if (type_k() != 0 || ow_model_uses(model) != 2)
		return 30;
	in.reading = 4.096;
	in.celsius = 0.0;
	if (ow_convert(model, &in, &out) != 0 || magnitude(out - 100.0) > 0.013)
		return 31;
	for (i = 0; i < ROWS; i++) {
		readings[i] = 0.02 * i;
		junctions[i] = 20.0 + 0.001 * i;
	}
	columns.readings = readings;
	if (ow_convert_slice(model, &columns, ROWS, results, words, &invalid) != OW_NULL)
		return 32;
	columns.celsius = junctions;
	readings[3] = 1e6;
	if (ow_convert_slice(model, &columns, ROWS, results, words, &invalid) != 0 || invalid != 1 || words[3] != 6)
		return 33;
	for (i = 0; i < ROWS; i++) {
		in.reading = readings[i];
		in.celsius = junctions[i];
		if (ow_convert(model, &in, &out) != (int32_t)words[i] || memcmp(&out, &results[i], sizeof out) != 0)
			return 34;
	}
	if (ow_convert_slice(model, &columns, ROWS, results, NULL, NULL) != 0)
		return 35;
	if (ow_convert_slice(model, &columns, (size_t)-1, results, NULL, NULL) != OW_LENGTH)
		return 36;
	if (ow_convert_slice(model, &columns, 0, results, words, &invalid) != 0 || invalid != 0)
		return 37;
	if (ow_convert_slice(model, NULL, 1, results, words, NULL) != OW_NULL)
		return 38;

	/* images: none, a damaged one, another version */
	if (ow_image_count((const uint8_t *)"OHMX", 4) != OW_CORRUPT || ow_image_count(NULL, 0) != OW_NULL)
		return 40;
	if (ow_image_count((const uint8_t *)"OHMW\2\0\0\0\0\0\0\0\0\0\0\0", 16) != OW_VERSION)
		return 41;
	if (ow_image_count(none, 16) != 0)
		return 42;
	if (ow_model_load(model, sizeof model_room.bytes, none, 16, 0) != OW_INDEX)
		return 43;
	if (ow_image_text(none, 16, 0, 0, text, sizeof text) != OW_INDEX)
		return 44;
	if (strcmp(ow_status_str(-12345), "unknown status") != 0)
		return 45;
	return 0;
}

/* what is wrong with a draft, and what stands beside a reading that is expected */
static int faults(void)
{
	ow_inputs in;
	double out = -7, nan;
	int32_t blamed = -2;

	memset(&in, 0, sizeof in);
	/* not a number, as a reading that has none */
	out = 0;
	nan = out / out;
	out = -7;
	/* the first field that is missing or has no such choice, by its number */
	if (begin() != 0 || ow_draft_check(draft, &blamed) != OW_MISSING || blamed != OW_FIELD_SIGNAL)
		return 100;
	if (set(OW_FIELD_SIGNAL, 9) != 0 || ow_draft_check(draft, &blamed) != OW_FIELD || blamed != OW_FIELD_SIGNAL)
		return 101;
	if (quarter() != 0 || ow_draft_check(draft, &blamed) != 0 || blamed != -1)
		return 102;
	if (set(OW_FIELD_ELEMENT, 3) != 0 || ow_draft_check(draft, &blamed) != OW_MISSING || blamed != OW_FIELD_LAW_OHMS ||
	    make() != OW_MISSING)
		return 103;
	/* a word beside no number, at limits in their order, and nothing but 0 and 1 */
	if (platinum() != 0 || set(OW_FIELD_LOW_LIMIT, 90) != 0 || set(OW_FIELD_LOW_WORD, 0) != 0 || make() != OW_UNFIT ||
	    ow_draft_check(draft, &blamed) != OW_UNFIT || blamed != -1)
		return 104;
	if (set(OW_FIELD_LOW_WORD, OW_WORD_AMBIGUOUS) != 0 || make() != OW_UNFIT || set(OW_FIELD_LOW_WORD, OW_WORD_EXTRAPOLATED) != 0 ||
	    make() != OW_UNFIT)
		return 105;
	if (set(OW_FIELD_LOW_WORD, OW_WORD_SHORT) != 0 || make() != 0 || set(OW_FIELD_HIGH_LIMIT, 80) != 0 ||
	    set(OW_FIELD_HIGH_WORD, OW_WORD_OPEN) != 0 || make() != OW_UNFIT || set(OW_FIELD_HIGH_LIMIT, 300) != 0 || make() != 0)
		return 106;
	if (set(OW_FIELD_EXTRAPOLATE, 0.5) != 0 || make() != OW_FIELD || ow_draft_check(draft, &blamed) != OW_FIELD ||
	    blamed != OW_FIELD_EXTRAPOLATE || set(OW_FIELD_EXTRAPOLATE, nan) != 0 || make() != OW_FIELD)
		return 107;
	/* beyond its range a law says so on both ways; 404.9695 ohm = 100 (1 + 900 A + 810000 B), IEC 60751:2008 */
	if (platinum() != 0 || set(OW_FIELD_EXTRAPOLATE, 1) != 0 || make() != 0)
		return 108;
	if (ow_expect(model, 900.0, &in, &out) != OW_WORD_EXTRAPOLATED || magnitude(out - 404.9695) > 1e-9)
		return 109;
	in.reading = out;
	if (ow_convert(model, &in, &out) != OW_WORD_EXTRAPOLATED || magnitude(out - 900.0) > 1e-9)
		return 110;
	/* an error writes nothing */
	out = -7;
	if (ow_expect(model, nan, &in, &out) != OW_VALUE || out != -7)
		return 111;
	return 0;
}

/* every function with every pointer null and misaligned, storage that is too small or holds nothing, images that are none */
static int wrong_use(void)
{
	static const uint8_t empty[16] = {'O', 'H', 'M', 'W', 1, 0, 0, 0, 0, 0, 0, 0, 0165, 0266, 0164, 0344}, newer[16] = {'O', 'H', 'M', 'W', 2}, other[4] = {'O', 'H', 'M', 'X'};
	static const uint8_t damaged[16] = {'O', 'H', 'M', 'W', 1, 0, 0, 0, 0, 0, 0, 0, 1};
	const size_t room = sizeof model_room.bytes;
	unsigned char *odd = second_room.bytes + 1;
	double odd_room[10];
	unsigned char *odd_numbers = (unsigned char *)odd_room + 1;
	ow_inputs in;
	ow_inputs_f32 single;
	ow_columns columns;
	double out = -7;
	float small = -7;
	uint8_t said[2];
	size_t invalid = 99;
	int32_t blamed;
	char text[8];
	uint32_t word;

	memset(&in, 0, sizeof in);
	memset(&single, 0, sizeof single);
	memset(&columns, 0, sizeof columns);
	memset(second_room.bytes, 0, sizeof second_room.bytes);
	memset(odd_room, 0, sizeof odd_room);
	if (platinum() != 0)
		return 70;
	in.reading = 100;
	single.reading = 100;

	/* drafts */
	if (ow_draft_begin(NULL, room) != OW_NULL || ow_draft_begin(odd, room - 8) != OW_MISALIGNED ||
	    ow_draft_begin(second, ow_draft_size() - 1) != OW_TOO_SMALL || ow_draft_begin(second, 0) != OW_TOO_SMALL)
		return 71;
	if (ow_draft_set(NULL, 0, 0) != OW_NULL || ow_draft_set(odd, 0, 0) != OW_MISALIGNED ||
	    ow_draft_set(second, 0, 0) != OW_NO_MODEL || ow_draft_set(model, 0, 0) != OW_NO_MODEL ||
	    ow_draft_set(draft, 0xffffffffu, 0) != OW_FIELD)
		return 72;
	if (ow_draft_check(NULL, &blamed) != OW_NULL || ow_draft_check(draft, NULL) != OW_NULL ||
	    ow_draft_check(odd, &blamed) != OW_MISALIGNED || ow_draft_check(second, &blamed) != OW_NO_MODEL)
		return 87;
	if (ow_model_make(NULL, room, draft) != OW_NULL || ow_model_make(odd, room - 8, draft) != OW_MISALIGNED ||
	    ow_model_make(second, ow_model_size() - 1, draft) != OW_TOO_SMALL || ow_model_make(second, 0, draft) != OW_TOO_SMALL ||
	    ow_model_make(second, room, NULL) != OW_NULL || ow_model_make(second, room, odd) != OW_MISALIGNED ||
	    ow_model_make(second, room, model) != OW_NO_MODEL)
		return 73;

	/* images */
	if (ow_image_count(NULL, 16) != OW_NULL || ow_image_count(empty, 0) != OW_CORRUPT ||
	    ow_image_count(empty, 15) != OW_CORRUPT || ow_image_count(newer, 16) != OW_VERSION ||
	    ow_image_count(other, 4) != OW_CORRUPT || ow_image_count(damaged, 16) != OW_CORRUPT ||
	    ow_image_count(empty, (size_t)-1) != OW_LENGTH)
		return 74;
	if (ow_model_load(NULL, room, empty, 16, 0) != OW_NULL || ow_model_load(odd, room - 8, empty, 16, 0) != OW_MISALIGNED ||
	    ow_model_load(second, ow_model_size() - 1, empty, 16, 0) != OW_TOO_SMALL ||
	    ow_model_load(second, 0, empty, 16, 0) != OW_TOO_SMALL || ow_model_load(second, room, NULL, 16, 0) != OW_NULL ||
	    ow_model_load(second, room, empty, 0, 0) != OW_CORRUPT || ow_model_load(second, room, newer, 16, 0) != OW_VERSION ||
	    ow_model_load(second, room, other, 4, 0) != OW_CORRUPT || ow_model_load(second, room, damaged, 16, 0) != OW_CORRUPT ||
	    ow_model_load(second, room, empty, 16, 0) != OW_INDEX || ow_model_load(second, room, empty, (size_t)-1, 0) != OW_LENGTH)
		return 75;
	if (ow_image_text(NULL, 16, 0, 0, text, sizeof text) != OW_NULL ||
	    ow_image_text(empty, 0, 0, 0, text, sizeof text) != OW_CORRUPT ||
	    ow_image_text(newer, 16, 0, 1, text, sizeof text) != OW_VERSION ||
	    ow_image_text(damaged, 16, 0, 1, text, sizeof text) != OW_CORRUPT ||
	    ow_image_text(empty, 16, 0, 0, NULL, 0) != OW_INDEX || ow_image_text(empty, (size_t)-1, 0, 0, text, 8) != OW_LENGTH)
		return 76;

	/* one reading; nothing is written when something is wrong */
	if (ow_convert(NULL, &in, &out) != OW_NULL || ow_convert(odd, &in, &out) != OW_MISALIGNED ||
	    ow_convert(second, &in, &out) != OW_NO_MODEL || ow_convert(draft, &in, &out) != OW_NO_MODEL ||
	    ow_convert(model, NULL, &out) != OW_NULL || ow_convert(model, (const ow_inputs *)odd_numbers, &out) != OW_MISALIGNED ||
	    ow_convert(model, &in, NULL) != OW_NULL || ow_convert(model, &in, (double *)odd_numbers) != OW_MISALIGNED || out != -7)
		return 77;
	if (ow_convert_f32(NULL, &single, &small) != OW_NULL || ow_convert_f32(odd, &single, &small) != OW_MISALIGNED ||
	    ow_convert_f32(second, &single, &small) != OW_NO_MODEL || ow_convert_f32(model, NULL, &small) != OW_NULL ||
	    ow_convert_f32(model, (const ow_inputs_f32 *)odd_numbers, &small) != OW_MISALIGNED ||
	    ow_convert_f32(model, &single, NULL) != OW_NULL ||
	    ow_convert_f32(model, &single, (float *)odd_numbers) != OW_MISALIGNED || small != -7)
		return 78;
	if (ow_expect(NULL, 0, &in, &out) != OW_NULL || ow_expect(odd, 0, &in, &out) != OW_MISALIGNED ||
	    ow_expect(second, 0, &in, &out) != OW_NO_MODEL || ow_expect(model, 0, NULL, &out) != OW_NULL ||
	    ow_expect(model, 0, (const ow_inputs *)odd_numbers, &out) != OW_MISALIGNED || ow_expect(model, 0, &in, NULL) != OW_NULL ||
	    ow_expect(model, 0, &in, (double *)odd_numbers) != OW_MISALIGNED || out != -7)
		return 79;
	if (ow_model_uses(NULL) != OW_NULL || ow_model_uses(odd) != OW_MISALIGNED || ow_model_uses(second) != OW_NO_MODEL)
		return 80;

	/* a slice */
	columns.readings = readings;
	if (ow_convert_slice(NULL, &columns, 2, results, said, &invalid) != OW_NULL ||
	    ow_convert_slice(odd, &columns, 2, results, said, &invalid) != OW_MISALIGNED ||
	    ow_convert_slice(second, &columns, 2, results, said, &invalid) != OW_NO_MODEL ||
	    ow_convert_slice(model, NULL, 2, results, said, &invalid) != OW_NULL ||
	    ow_convert_slice(model, (const ow_columns *)odd_numbers, 2, results, said, &invalid) != OW_MISALIGNED ||
	    ow_convert_slice(model, &columns, 2, NULL, said, &invalid) != OW_NULL ||
	    ow_convert_slice(model, &columns, 2, (double *)odd_numbers, said, &invalid) != OW_MISALIGNED ||
	    ow_convert_slice(model, &columns, 2, results, said, (size_t *)odd_numbers) != OW_MISALIGNED)
		return 81;
	columns.readings = (const double *)odd_numbers;
	if (ow_convert_slice(model, &columns, 2, results, said, &invalid) != OW_MISALIGNED)
		return 82;
	columns.readings = NULL;
	if (ow_convert_slice(model, &columns, 2, results, said, &invalid) != OW_NULL)
		return 83;
	columns.readings = readings;
	columns.supplies = (const double *)odd_numbers;
	if (ow_convert_slice(model, &columns, 2, results, said, &invalid) != OW_MISALIGNED || invalid != 99)
		return 84;
	columns.supplies = NULL;
	/* no rows need no columns */
	if (ow_convert_slice(model, NULL, 0, NULL, NULL, NULL) != 0 || ow_convert_slice(NULL, NULL, 0, NULL, NULL, NULL) != OW_NULL ||
	    ow_convert_slice(model, NULL, 0, NULL, NULL, (size_t *)odd_numbers) != OW_MISALIGNED ||
	    ow_convert_slice(model, NULL, 0, NULL, NULL, &invalid) != 0 || invalid != 0)
		return 85;

	/* a model of another version of the interface: its first word differs */
	memcpy(&word, model, sizeof word);
	word++;
	memcpy(model, &word, sizeof word);
	if (ow_convert(model, &in, &out) != OW_NO_MODEL || ow_convert_f32(model, &single, &small) != OW_NO_MODEL ||
	    ow_expect(model, 0, &in, &out) != OW_NO_MODEL || ow_model_uses(model) != OW_NO_MODEL ||
	    ow_convert_slice(model, &columns, 2, results, said, &invalid) != OW_NO_MODEL)
		return 86;
	return 0;
}

/* an image on disk: every chain loads, has a name, and converts there and back */
static int image(const char *path)
{
	static uint8_t bytes[1 << 20];
	char name[64], unit[64];
	FILE *file = fopen(path, "rb");
	size_t length;
	int count, i;

	if (file == NULL)
		return 50;
	length = fread(bytes, 1, sizeof bytes, file);
	fclose(file);
	count = ow_image_count(bytes, length);
	if (count <= 0)
		return 51;
	for (i = 0; i < count; i++) {
		ow_inputs in;
		double reading;
		memset(&in, 0, sizeof in);
		in.supply = 2.5;
		in.celsius = 21.0;
		in.lead_celsius = 21.0;
		if (ow_model_load(model, sizeof model_room.bytes, bytes, length, (size_t)i) != 0)
			return 52;
		if (ow_image_text(bytes, length, (size_t)i, 0, name, sizeof name) <= 0 ||
		    ow_image_text(bytes, length, (size_t)i, 1, unit, sizeof unit) < 0)
			return 53;
		if (ow_expect(model, 20.0, &in, &reading) != 0)
			return 54;
		in.reading = reading;
		if (ow_convert(model, &in, &reading) != 0)
			return 55;
		printf("%-16s %.17g %s\n", name, reading, unit);
	}
	/* a name that does not fit is cut; no room takes nothing */
	i = ow_image_text(bytes, length, 0, 0, NULL, 0);
	if (i <= 3 || ow_image_text(bytes, length, 0, 0, NULL, 4) != OW_NULL || ow_image_text(bytes, length, 0, 0, name, 4) != i ||
	    strlen(name) != 3)
		return 57;
	bytes[length / 2] ^= 1;
	if (ow_image_count(bytes, length) != OW_CORRUPT || ow_image_text(bytes, length, 0, 0, name, sizeof name) != OW_CORRUPT ||
	    ow_model_load(model, sizeof model_room.bytes, bytes, length, 0) != OW_CORRUPT)
		return 56;
	return 0;
}

int main(int argc, char **argv)
{
	int failed;
	model = model_room.bytes;
	second = second_room.bytes;
	draft = draft_room.bytes;
	failed = checks();
	if (failed == 0)
		failed = faults();
	if (failed == 0)
		failed = wrong_use();
	if (failed == 0 && argc > 1)
		failed = image(argv[1]);
	if (failed != 0)
		printf("check %d failed\n", failed);
	return failed;
}
