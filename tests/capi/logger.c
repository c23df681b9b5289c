/*
 * A worked logger: codes come in one by one into a ring, are converted one by one, and leave as a table.
 *
 *     .ci/capi                       builds and runs it
 *
 * The image is what `ohmwright image tests/capi/logger.toml -o logger.owi` wrote; the codes are made up here.
 */
#include "ohmwright.h"

#include <stdio.h>
#include <string.h>

#define CHANNELS 4
#define RING 64
#define SAMPLES 200

/* models lie in storage of their own, sized at compile time and checked at start */
static union {
	double align;
	unsigned char bytes[6144];
} rooms[CHANNELS];

/* one ring a channel: what was read, and where the next sample goes */
struct ring {
	double reading[RING];
	unsigned head, count;
};

static struct ring rings[CHANNELS];
static uint8_t image[4096];

static void put(struct ring *ring, double reading)
{
	ring->reading[ring->head] = reading;
	ring->head = (ring->head + 1) % RING;
	if (ring->count < RING)
		ring->count++;
}

static double newest(const struct ring *ring)
{
	return ring->reading[(ring->head + RING - 1) % RING];
}

/* what the converters would give: a slow wave on the gauge, a warming deck, a box, a flue; sample 150 saturates */
static double sample(int channel, int n)
{
	switch (channel) {
	case 0:
		return n == 150 ? 8388607.0 : (double)((n % 40 - 20) * 4000);
	case 1:
		return 107.0 + 0.01 * n;
	case 2:
		return (double)(2048 - n);
	default:
		return 3.0 + 0.02 * n;
	}
}

int main(int argc, char **argv)
{
	char name[CHANNELS][32];
	size_t length;
	FILE *file;
	int channel, n;

	if (argc == 2 && strcmp(argv[1], "--sizes") == 0) {
		printf("%lu", (unsigned long)ow_model_size());
		return 0;
	}
	if (ow_abi() != OW_ABI || ow_model_size() > sizeof rooms[0].bytes || argc < 2) {
		fprintf(stderr, "logger IMAGE, with the library that it was compiled for\n");
		return 1;
	}
	file = fopen(argv[1], "rb");
	if (file == NULL) {
		fprintf(stderr, "%s: cannot be opened\n", argv[1]);
		return 1;
	}
	length = fread(image, 1, sizeof image, file);
	fclose(file);
	if (ow_image_count(image, length) != CHANNELS) {
		fprintf(stderr, "%s: no image of %d chains\n", argv[1], CHANNELS);
		return 2;
	}
	for (channel = 0; channel < CHANNELS; channel++) {
		int32_t status = ow_model_load(rooms[channel].bytes, sizeof rooms[channel].bytes, image, length, (size_t)channel);
		if (status != 0) {
			fprintf(stderr, "channel %d: %s\n", channel, ow_status_str(status));
			return 3;
		}
		ow_image_text(image, length, (size_t)channel, 0, name[channel], sizeof name[channel]);
		printf("%s%s", channel > 0 ? "," : "", name[channel]);
	}
	printf(",flags\n");
	for (n = 0; n < SAMPLES; n++) {
		ow_inputs in;
		double value[CHANNELS] = {0};
		int32_t word[CHANNELS];
		memset(&in, 0, sizeof in);
		for (channel = 0; channel < CHANNELS; channel++) {
			put(&rings[channel], sample(channel, n));
			in.reading = newest(&rings[channel]);
			/* the flue's reference junction is the box */
			in.celsius = channel == 3 ? value[2] : 0.0;
			word[channel] = ow_convert(rooms[channel].bytes, &in, &value[channel]);
		}
		for (channel = 0; channel < CHANNELS; channel++) {
			/* a word is not a value: the cell stays empty, here also where a number stands beside it (ambiguous, extrapolated);
			   an error below 0 wrote nothing, and stands among the flags too */
			if (word[channel] == 0)
				printf("%s%.3f", channel > 0 ? "," : "", value[channel]);
			else
				printf("%s", channel > 0 ? "," : "");
		}
		printf(",");
		for (channel = 0; channel < CHANNELS; channel++)
			if (word[channel] != 0)
				printf("%s:%s ", name[channel], ow_status_str(word[channel]));
		printf("\n");
	}
	return 0;
}
