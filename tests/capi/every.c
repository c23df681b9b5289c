/*
 * Calls every function of the interface, without a C library: what the linker keeps is what they can reach. Run, it returns 0,
 * or the number of the first answer that was wrong. With -DCONTROL it also calls a function that can panic, which the search of
 * .ci/capi must find.
 */
#include "ohmwright.h"

/* what compilers may call */
void *memset(void *s, int c, size_t n)
{
	volatile char *p = s;
	while (n--)
		*p++ = (char)c;
	return s;
}

void *memcpy(void *d, const void *s, size_t n)
{
	volatile char *to = d;
	const volatile char *from = s;
	while (n--)
		*to++ = *from++;
	return d;
}

void *memmove(void *d, const void *s, size_t n)
{
	volatile char *to = d;
	const volatile char *from = s;
	if (to <= from)
		return memcpy(d, s, n);
	while (n--)
		to[n] = from[n];
	return d;
}

int memcmp(const void *a, const void *b, size_t n)
{
	const volatile unsigned char *p = a, *q = b;
	for (; n--; p++, q++)
		if (*p != *q)
			return *p < *q ? -1 : 1;
	return 0;
}

#ifdef CONTROL
uint8_t ow_control(size_t index);

/* called by the panic handler alone */
__attribute__((noreturn)) void ow_panic_was_reached(void)
{
	for (;;)
		;
}
#endif

__attribute__((noreturn)) static void leave(int code)
{
#if defined(__x86_64__)
	__asm__ volatile("syscall" ::"a"(231L), "D"((long)code) : "memory");
#elif defined(__aarch64__)
	register long x8 __asm__("x8") = 94;
	register long x0 __asm__("x0") = code;
	__asm__ volatile("svc 0" ::"r"(x8), "r"(x0) : "memory");
#endif
	for (;;)
		;
}

#define ROWS 600

static union {
	double align;
	unsigned char bytes[8192];
} model, draft;

static double readings[ROWS], results[ROWS];
static uint8_t words[ROWS];

static int set(uint32_t field, double value)
{
	return ow_draft_set(draft.bytes, field, value);
}

static int calls(void)
{
	static const uint8_t none[16] = {'O', 'H', 'M', 'W', 1, 0, 0, 0, 0, 0, 0, 0, 0165, 0266, 0164, 0344};
	ow_inputs in = {138.5055, 0, 0, 0, {0, 0, 0, 0}};
	ow_inputs_f32 single = {138.5055f, 0, 0, 0, {0, 0, 0, 0}};
	ow_columns columns = {readings, NULL, NULL, NULL, {NULL, NULL, NULL, NULL}};
	double out = 0, back = 0;
	float small = 0;
	size_t invalid = 0;
	int32_t blamed = 0;
	char text[8];
	int i;

	if (ow_abi() != OW_ABI || ow_version() == 0)
		return 1;
	if (ow_model_size() > sizeof model.bytes || ow_draft_size() > sizeof draft.bytes)
		return 2;
	if (ow_model_align() > sizeof(double) || ow_draft_align() > sizeof(double))
		return 3;
	/* IEC 60751:2008: A, B and C of the standard; 138.5055 ohm at 100 degC */
	if (ow_draft_begin(draft.bytes, sizeof draft.bytes) != 0 || set(OW_FIELD_SIGNAL, 2) != 0 ||
	    set(OW_FIELD_NETWORK, 1) != 0 || set(OW_FIELD_ELEMENT, 3) != 0 || set(OW_FIELD_LAW_OHMS, 100) != 0 ||
	    set(OW_FIELD_LAW_COEFFICIENT, 3.9083e-3) != 0 || set(OW_FIELD_LAW_COEFFICIENT + 1, -5.775e-7) != 0 ||
	    set(OW_FIELD_LAW_COEFFICIENT + 2, -4.183e-12) != 0 || set(OW_FIELD_LAW_RANGE, -200) != 0 ||
	    set(OW_FIELD_LAW_RANGE + 1, 850) != 0 || set(OW_FIELD_OUTPUT, 2) != 0)
		return 4;
	if (ow_draft_check(draft.bytes, &blamed) != 0 || blamed != -1)
		return 5;
	if (ow_model_make(model.bytes, sizeof model.bytes, draft.bytes) != 0 || ow_model_uses(model.bytes) != 0)
		return 5;
	if (ow_convert(model.bytes, &in, &out) != 0 || out - 100 > 1e-9 || 100 - out > 1e-9)
		return 6;
	if (ow_convert_f32(model.bytes, &single, &small) != 0 || small - 100 > 2e-5f || 100 - small > 2e-5f)
		return 7;
	if (ow_expect(model.bytes, 100, &in, &back) != 0 || back - 138.5055 > 1e-9 || 138.5055 - back > 1e-9)
		return 8;
	for (i = 0; i < ROWS; i++)
		readings[i] = i == 7 ? 1e9 : 138.5055;
	if (ow_convert_slice(model.bytes, &columns, ROWS, results, words, &invalid) != 0 || invalid != 1 || words[7] != 4)
		return 9;
	if (memcmp(&results[0], &out, sizeof out) != 0)
		return 10;
	if (ow_image_count(none, sizeof none) != 0 || ow_image_text(none, sizeof none, 0, 0, text, sizeof text) != OW_INDEX ||
	    ow_model_load(model.bytes, sizeof model.bytes, none, sizeof none, 0) != OW_INDEX)
		return 11;
	if (*ow_status_str(0) != 'g')
		return 12;
#ifdef CONTROL
	{
		volatile size_t index = 1;
		if (ow_control(index) != 2)
			return 99;
	}
#endif
	return 0;
}

void begin(void)
{
	leave(calls());
}

/* the stack as the calling convention wants it */
#if defined(__x86_64__)
__asm__(".globl _start\n_start:\n\txor %ebp, %ebp\n\tand $-16, %rsp\n\tcall begin\n");
#else
void _start(void)
{
	begin();
}
#endif
