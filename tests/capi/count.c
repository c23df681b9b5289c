/*
 * Converts one reading again and again, for tests/capi/instructions.sh:
 *
 *     count IMAGE INDEX TIMES READING CELSIUS        by ow_convert
 *     count IMAGE INDEX TIMES READING CELSIUS slice  by ow_convert_slice, TIMES a multiple of 1024
 */
#include "ohmwright.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define ROWS 1024

static union {
	double align;
	unsigned char bytes[8192];
} room;

static uint8_t image[1 << 16];
static double readings[ROWS], celsius[ROWS], results[ROWS];

int main(int argc, char **argv)
{
	ow_inputs in;
	ow_columns columns;
	double out = 0, sum = 0;
	size_t length;
	long times, n;
	FILE *file;

	if (argc < 6 || (file = fopen(argv[1], "rb")) == NULL)
		return 1;
	length = fread(image, 1, sizeof image, file);
	fclose(file);
	if (ow_model_load(room.bytes, sizeof room.bytes, image, length, (size_t)atol(argv[2])) != 0)
		return 2;
	times = atol(argv[3]);
	memset(&in, 0, sizeof in);
	in.supply = 2.5;
	in.reading = atof(argv[4]);
	in.celsius = atof(argv[5]);
	if (argc > 6) {
		memset(&columns, 0, sizeof columns);
		columns.readings = readings;
		columns.celsius = celsius;
		for (n = 0; n < ROWS; n++) {
			readings[n] = in.reading;
			celsius[n] = in.celsius;
		}
		for (n = 0; n < times; n += ROWS)
			if (ow_convert_slice(room.bytes, &columns, ROWS, results, NULL, NULL) != 0)
				return 3;
		sum = results[0] * (double)times;
	} else {
		for (n = 0; n < times; n++) {
			if (ow_convert(room.bytes, &in, &out) != 0)
				return 3;
			sum += out;
		}
	}
	printf("%.17g\n", sum);
	return 0;
}
