/*
 * Reads a table that `curve` made, again and again, for tests/capi/instructions.sh:
 *
 *     count_table TIMES
 *
 * KIND is the type of its numbers, POINT the binary point of its readings, 0 for volts.
 */
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

int32_t by_table(KIND reading, KIND *value);

#define ROWS 1024

static KIND readings[ROWS], results[ROWS];

int main(int argc, char **argv)
{
	double scale = (double)(1ll << POINT), sum = 0;
	long times = argc > 1 ? atol(argv[1]) : 0, n;
	int32_t words = 0;

	/* from 0.5 V to 2.5 V, in no order */
	for (n = 0; n < ROWS; n++)
		readings[n] = (KIND)((0.5 + 2.0 * (double)(n * 389 % ROWS) / ROWS) * scale);
	for (n = 0; n < times; n++)
		words |= by_table(readings[n % ROWS], &results[n % ROWS]);
	for (n = 0; n < ROWS; n++)
		sum += (double)results[n];
	printf("%d %.9g\n", (int)words, sum);
	return words != 0;
}
